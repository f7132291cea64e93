import { isInSeries, nearest, type SeriesName } from '#shared/parts/series.ts'
import { getAt, type DraftDocument } from '../draft/paths.ts'

/** Parts whose values are fixed by hand, whether or not an arrangement has them. */
export function fixedRefs(document: DraftDocument): string[] {
  const values = getAt(document, 'choose.values')
  return typeof values === 'object' && values !== null ? Object.keys(values) : []
}

/** Why a value cannot be that of a part; null where it can. */
export const refusedPart = (value: number, unit: 'Ω' | 'F'): string | null =>
  value > 0 ? null : `Type a ${unit === 'F' ? 'capacitance' : 'resistance'} above 0.`

/** The nearest value of the series where `value` is none of it; null where it is, or cannot be a part's value. */
export const nearestOther = (value: number, series: SeriesName): number | null =>
  value > 0 && Number.isFinite(value) && !isInSeries(value, series) ? nearest(value, series) : null
