/** One measured line. `met` is null where nothing is required of it. */
export interface Row {
  what: string
  value: number
  unit: string
  required: string
  met: boolean | null
  /** Rows of one headline are one line of the table in README, the worst of them. */
  headline?: string
}

/** Three significant digits: "1,500", "0.31", "1.3e-14". */
export function written(value: number): string {
  if (value !== 0 && Math.abs(value) < 1e-3) return Number(value.toPrecision(2)).toExponential()
  return value.toLocaleString('en', { maximumSignificantDigits: 3 })
}

/** What is required of a figure, as a number. */
export type Bound = { most?: number } | { least?: number } | Record<string, never>

export function toRow(what: string, value: number, unit: string, bound: Bound, headline?: string): Row {
  const head = headline === undefined ? {} : { headline }
  const said = (sign: string, limit: number) => `${sign} ${written(limit)}${unit ? ` ${unit}` : ''}`
  if ('most' in bound && bound.most !== undefined)
    return { what, value, unit, required: said('≤', bound.most), met: value <= bound.most, ...head }
  if ('least' in bound && bound.least !== undefined)
    return { what, value, unit, required: said('≥', bound.least), met: value >= bound.least, ...head }
  return { what, value, unit, required: '', met: null, ...head }
}

/** Milliseconds that some work takes. */
export function milliseconds(work: () => unknown): number {
  const start = performance.now()
  work()
  return performance.now() - start
}

/** Of ascending figures the one below which so large a share of them lies. */
export const quantile = (sorted: readonly number[], share: number): number =>
  sorted[Math.min(sorted.length - 1, Math.floor(sorted.length * share))] ?? Number.NaN
