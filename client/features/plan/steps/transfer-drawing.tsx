/** The transfer plot of the chain. */
export function TransferDrawing() {
  return null
}
