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
