import cases from '#tests/fixtures/filter-cases.json' with { type: 'json' }

interface Tolerance {
  abs?: number
  rel?: number
}

interface Entry {
  id: string
  source: string
  given: Record<string, unknown>
  expect: Record<string, unknown>
  recomputed: Record<string, unknown>
  tolerance: Record<string, Tolerance | undefined>
}

const entries: readonly Entry[] = cases

const list = (value: unknown): number[] => (Array.isArray(value) ? value : [value]).map(Number)

/** Figures of a published filter: NaN, which is close to nothing, where a key is not there. */
export class FilterCase {
  readonly name: string

  constructor(private readonly entry: Entry) {
    this.name = `${entry.id} (${entry.source})`
  }

  /** Words that describe what is given. */
  word = (key: string): string => String(this.entry.given[key] ?? '')
  given = (key: string): number => list(this.entry.given[key])[0] ?? NaN
  givenList = (key: string): number[] => list(this.entry.given[key])
  /** As printed, and the same at full precision. */
  printed = (key: string): number => this.printedList(key)[0] ?? NaN
  printedList = (key: string): number[] => list(this.entry.expect[key])
  printedKeys = (): string[] => Object.keys(this.entry.expect)
  exact = (key: string): number => this.exactList(key)[0] ?? NaN
  exactList = (key: string): number[] => list(this.entry.recomputed[key])
  exactKeys = (): string[] => Object.keys(this.entry.recomputed)
  /** What the printed rounding allows. */
  allowance = (key: string): { absolute: number; relative: number } => {
    const { abs = 0, rel = 0 } = this.entry.tolerance[key] ?? {}
    return { absolute: abs, relative: rel }
  }
}

export const filterCases = entries.map((entry) => new FilterCase(entry))

export function filterCase(id: string): FilterCase {
  const found = entries.find((entry) => entry.id === id)
  if (!found) throw new Error(`there is no filter case ${id}`)
  return new FilterCase(found)
}
