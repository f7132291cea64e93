import type { TransferInput } from '#shared/drawings/transfer-input.ts'

/**
 * Where a key moves the cursor, in the measurand's unit: Left and Right 1 % of the span (fine 0.1 %), Home and End to
 * the ends of the required span, L to the next limit. Null where the key does nothing here.
 */
export function moveCursor(
  input: TransferInput,
  cursor: number | null,
  key: string,
  { fine, letters }: { fine: boolean; letters: boolean },
): number | null {
  const { low, high } = input.quantity
  const [least, most] = [Math.min(low, high), Math.max(low, high)]
  const step = ((most - least) * (fine ? 1 : 10)) / 1000
  const at = cursor ?? least
  switch (key) {
    case 'ArrowRight':
      return cursor === null ? least : tidy(at + step, step)
    case 'ArrowLeft':
      return cursor === null ? most : tidy(at - step, step)
    case 'Home':
      return least
    case 'End':
      return most
    case 'l':
    case 'L':
      return letters ? nextLimit(input, at) : null
    default:
      return null
  }
}

/** Drops the residue of repeated steps. */
const tidy = (value: number, step: number): number =>
  Math.abs(value) < step / 1000 ? 0 : Number(value.toPrecision(12))

function nextLimit({ linear, quantity }: TransferInput, at: number): number | null {
  const limits = [linear.low, linear.high, quantity.low, quantity.high]
    .filter((v) => v !== null)
    .sort((a, b) => a - b)
  return limits.find((v) => v > at) ?? limits[0] ?? null
}
