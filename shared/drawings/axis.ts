import { formatNumber, formatQuantity, type DecimalSign } from '#shared/units/format-quantity.ts'

/** Round values that divide a range into about `count` steps of 1, 2 or 5 times a power of ten. */
export function ticks(low: number, high: number, count: number): number[] {
  const span = high - low
  if (!(span > 0) || !Number.isFinite(span)) return []
  const rough = span / count
  const power = 10 ** Math.floor(Math.log10(rough))
  const step = [1, 2, 5, 10].map((m) => m * power).find((s) => s >= rough * (1 - 1e-9)) ?? 10 * power
  const first = Math.ceil(low / step - 1e-9)
  const last = Math.floor(high / step + 1e-9)
  return Array.from({ length: Math.max(0, last - first + 1) }, (_, i) => {
    const value = (first + i) * step
    // Steps of a decimal fraction gather residues; fifteen digits carry none.
    return value === 0 ? 0 : Number(value.toPrecision(12))
  })
}

/** Ticks of a logarithmic axis: decades, with 2 and 5 between where there are few of them; both ends above 0. */
export function logTicks(low: number, high: number, count = 8): number[] {
  if (!(low > 0) || !(high > low) || !Number.isFinite(high)) return []
  const decades = Math.log10(high / low)
  const factors = decades <= count / 3 ? [1, 2, 5] : [1]
  const every = Math.max(1, Math.ceil(decades / count))
  const first = Math.floor(Math.log10(low) + 1e-9)
  const last = Math.ceil(Math.log10(high) - 1e-9)
  const all: number[] = []
  for (let power = first; power <= last; power += 1) {
    if (every > 1 && power % every !== 0) continue
    for (const factor of factors) all.push(Number(`${factor}e${power}`))
  }
  return all.filter((value) => value >= low * (1 - 1e-9) && value <= high * (1 + 1e-9))
}

/** A tick with as many places as its neighbours. */
export function tickText(value: number, all: readonly number[], decimalSign: DecimalSign): string {
  const places = Math.max(...all.map((v) => (String(v).split('.')[1] ?? '').length))
  const text =
    Math.abs(value) >= 1e5 || places > 6 ? formatNumber(value, { decimalSign }) : value.toFixed(places)
  return text.replace('-', '−').replace('.', decimalSign)
}

/**
 * Words at the ticks of a linear axis: plain numbers with the unit once, at the last; where all of them are small, each
 * with its prefix.
 */
export function tickWords(all: readonly number[], unit: string, decimalSign: DecimalSign): string[] {
  if (unit !== '' && Math.max(...all.map(Math.abs)) < 0.1)
    return all.map((value) => (value === 0 ? '0' : formatQuantity(value, unit, { digits: 3, decimalSign })))
  return all.map(
    (value, i) =>
      `${tickText(value, all, decimalSign)}${i === all.length - 1 && unit ? `${unit === '°' ? '' : '\u00a0'}${unit}` : ''}`,
  )
}
