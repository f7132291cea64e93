export type CircuitErrorCode =
  'no-dc-path' | 'not-determined' | 'source-loop' | 'unknown-node' | 'unknown-element'

/** A network that has no single answer, or a question about a node or element that it does not have. */
export class CircuitError extends RangeError {
  override readonly name = 'CircuitError'
  readonly code: CircuitErrorCode
  /** The node or element that the message speaks of. */
  readonly place: string

  constructor(code: CircuitErrorCode, place: string, message: string) {
    super(message)
    this.code = code
    this.place = place
  }
}
