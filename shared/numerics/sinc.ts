/**
 * Decimating averager of order k: M samples at a rate fm summed k times over, one result every M samples,
 *
 *   |H(f)| = |sin(π·f·M/fm) / (M·sin(π·f/fm))|^k
 *
 * with nulls at every multiple of the output rate fm/M and images around every multiple of fm. Without a known fm it is
 * taken as far above: |sin(πx)/(πx)|^k, x = f over output rate. Source: Hogenauer, "An economical class of digital
 * filters for decimation and interpolation", IEEE Trans. ASSP 29 (1981).
 */
export interface Sinc {
  order: number
  /** Hz */
  outputRate: number
  /** Hz; null where it is not known. */
  modulatorRate: number | null
}

/** |H(f)|, from 0 to 1. */
export function sincMagnitude({ order, outputRate, modulatorRate }: Sinc, frequency: number): number {
  const top = Math.sin((Math.PI * frequency) / outputRate)
  const below = denominator(outputRate, modulatorRate, frequency)
  // at 0 Hz and around each multiple of the modulator rate numerator and denominator vanish together
  if (Math.abs(below) < 1e-9) return 1
  return Math.min(1, Math.abs(top / below)) ** order
}

/** Lobes of which the exact form is kept; beyond them the mean over a lobe. */
export const SINC_LOBES = 8

/**
 * |H(f)|² for an integral over a smooth spectrum: exact over the first lobes, then the mean over a lobe, and from half
 * the modulator rate up the mean over a whole image.
 */
export function sincPower(sinc: Sinc, frequency: number): number {
  const { order, outputRate, modulatorRate } = sinc
  if (frequency < SINC_LOBES * outputRate) return sincMagnitude(sinc, frequency) ** 2
  const mean = meanSinePower(order)
  if (modulatorRate === null || frequency < modulatorRate / 2)
    return mean / Math.abs(denominator(outputRate, modulatorRate, frequency)) ** (2 * order)
  return meanImage(order, modulatorRate / outputRate)
}

function denominator(outputRate: number, modulatorRate: number | null, frequency: number): number {
  if (modulatorRate === null) return (Math.PI * frequency) / outputRate
  return (modulatorRate / outputRate) * Math.sin((Math.PI * frequency) / modulatorRate)
}

/** Mean of sin^2k over a period: (2k − 1)!!/(2k)!!. */
function meanSinePower(order: number): number {
  let mean = 1
  for (let i = 1; i <= order; i++) mean *= (2 * i - 1) / (2 * i)
  return mean
}

/**
 * Mean of |H|² over one image: the sum of squares of the averager's weights, which are those of k boxes of M convolved;
 * for a large M that tends to c/M with c the value at 0 of 2k boxes convolved: 1, 2/3, 11/20, 151/315.
 */
function meanImage(order: number, ratio: number): number {
  const limits = [1, 2 / 3, 11 / 20, 151 / 315]
  return (limits[order - 1] ?? 1) / ratio
}
