/** Shortest decimal text that reads back as the same double; SPICE takes it as it is. */
export function toSpiceNumber(value: number): string {
  if (!Number.isFinite(value)) throw new RangeError(`${value} cannot be written in SPICE text`)
  return Object.is(value, -0) ? '0' : String(value)
}
