import { MANTISSAS } from './series-data.ts'

export type SeriesName = keyof typeof MANTISSAS | 'E24+E96'

export const seriesNames = [
  'E3',
  'E6',
  'E12',
  'E24',
  'E48',
  'E96',
  'E192',
  'E24+E96',
] as const satisfies readonly SeriesName[]

/** Relative width within which a typed or computed value counts as the series value itself. */
const SAME = 1e-9

/** Whole hundredths of one decade, ascending: 100 … 988. */
const decades = Object.fromEntries(seriesNames.map((name) => [name, hundredths(name)])) as Record<
  SeriesName,
  readonly number[]
>

const members = Object.fromEntries(
  seriesNames.map((name) => [name, new Set(decades[name])]),
) as unknown as Record<SeriesName, ReadonlySet<number>>

const windows = new Map<string, readonly number[]>()
const WINDOWS_KEPT = 64

/**
 * Every value of a series from `minimum` to `maximum` (both included), ascending, in the unit of the bounds (Ω or F).
 * Each value is the double nearest to its decimal (4.7e3, not 4700.000001). The same request gives the same frozen
 * array, so that lists built on it can be kept. Source: IEC 60063:2015.
 *
 * @throws RangeError unless 0 < minimum ≤ maximum < ∞
 */
export function standardValues(series: SeriesName, minimum: number, maximum: number): readonly number[] {
  if (!(minimum > 0 && maximum >= minimum && maximum < Infinity))
    throw new RangeError(
      `A window of values runs from a number above 0 to one not below it, not ${minimum} to ${maximum}`,
    )
  const key = `${series} ${minimum} ${maximum}`
  const kept = windows.get(key)
  if (kept) return kept
  const values: number[] = []
  const last = Math.floor(Math.log10(maximum)) + 1
  for (let exponent = Math.floor(Math.log10(minimum)) - 1; exponent <= last; exponent++) {
    for (const mantissa of decades[series]) {
      const value = decimal(mantissa, exponent)
      // A bound that was computed may miss a value of the series by a rounding; the bound means that value.
      if (value >= minimum * (1 - SAME) && value <= maximum * (1 + SAME)) values.push(value)
    }
  }
  const frozen = Object.freeze(values)
  if (windows.size >= WINDOWS_KEPT) windows.clear()
  windows.set(key, frozen)
  return frozen
}

/** Whether a value (> 0) is a preferred number of the series in any decade. */
export function isInSeries(value: number, series: SeriesName): boolean {
  if (!(value > 0 && value < Infinity)) return false
  const hundredths = value / 10 ** (Math.floor(Math.log10(value)) - 2)
  const mantissa = Math.round(hundredths)
  if (Math.abs(hundredths / mantissa - 1) > SAME) return false
  return members[series].has(mantissa === 1000 ? 100 : mantissa)
}

/**
 * The series value nearest to `value` (> 0), in any decade: by ratio, as the steps of a series are ratios, or by
 * difference. Of two equally near ones the smaller.
 *
 * @throws RangeError for a value that is not a finite number above 0
 */
export function nearest(
  value: number,
  series: SeriesName,
  measure: 'ratio' | 'difference' = 'ratio',
): number {
  if (!(value > 0 && value < Infinity))
    throw new RangeError(`A standard value is near a finite number above 0, not ${value}`)
  const exponent = Math.floor(Math.log10(value))
  const distance = (candidate: number): number =>
    measure === 'ratio' ? Math.abs(Math.log(candidate / value)) : Math.abs(candidate - value)
  let best = 0
  let least = Infinity
  for (let shift = -1; shift <= 1; shift++) {
    for (const mantissa of decades[series]) {
      const candidate = decimal(mantissa, exponent + shift)
      if (distance(candidate) < least) {
        least = distance(candidate)
        best = candidate
      }
    }
  }
  return best
}

function hundredths(name: SeriesName): readonly number[] {
  if (name === 'E24+E96')
    return [...new Set([...hundredths('E24'), ...hundredths('E96')])].sort((a, b) => a - b)
  const mantissas: readonly number[] = MANTISSAS[name]
  const scale = mantissas[0] === 10 ? 10 : 1
  return mantissas.map((mantissa) => mantissa * scale)
}

/** mantissa·10^(exponent − 2) by way of its decimal text, which is rounded once and correctly. */
function decimal(mantissa: number, exponent: number): number {
  return Number(`${mantissa}e${exponent - 2}`)
}
