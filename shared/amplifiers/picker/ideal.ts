import { type LevelForm, levelRefs, type Pair, pairRefs, type ValueForm } from './forms.ts'

/** A ratio this close to the edge of what a pair can make counts as the edge: rounding, not physics. */
const EDGE = 1e-9

/**
 * The values that the arrangement's ideal design equations ask for, Ω by ref, before any series. Equations fix ratios
 * only; each pair is placed so that its geometric mean is the preferred impedance. A ref that is to be left open is
 * absent, a link is 0. Null where the target needs a negative resistor, that is where the arrangement does not exist.
 *
 * Formulas: the engine's table of arrangements solved for the ratios, source and reference resistance included.
 */
export function idealValues(form: ValueForm, target: Pair, preferred: number): Record<string, number> | null {
  const found = ratios(form, target, preferred)
  if (!found) return null
  const values: Record<string, number> = {}
  for (const [ref, value] of Object.entries(found)) {
    if (!(value >= 0)) return null
    if (value !== Infinity) values[ref] = value
  }
  return values
}

/**
 * The β that brings p + β·d nearest to the target at both ends: its two errors are equal and opposite in sense.
 * @param c p − target at the two ends, @param d slope at the two ends; same unit
 */
export function nearestFactor(c: Pair, d: Pair): number {
  return -(Math.sign(d[0]) * c[0] + Math.sign(d[1]) * c[1]) / (Math.abs(d[0]) + Math.abs(d[1]))
}

type Values = Record<string, number> | null

function ratios(form: ValueForm, target: Pair, preferred: number): Values {
  const [s0, s1] = form.signal
  const rs = form.source ?? 0
  const rv = 'referenceResistance' in form ? (form.referenceResistance ?? 0) : 0
  const gain = (target[1] - target[0]) / (s1 - s0)
  const offset = target[0] - gain * s0
  const pair = (upper: string, lower: string, ratio: number, above = 0, below = 0): Values =>
    spread(upper, lower, ratio, above, below, preferred)
  /** The one factor of an arrangement without an offset of its own. */
  const factor = (level = 0): number => nearestFactor([level - target[0], level - target[1]], form.signal)

  switch (form.kind) {
    case 'attenuator':
      return pair('R1', 'R2', 1 / factor() - 1, rs)
    case 'non-inverting':
      return pair('Rf', 'Rg', factor() - 1)
    case 'inverting':
      return pair('Rf', 'Rg', -factor(), 0, rs)
    case 'non-inverting-up': {
      const rho = offset / (form.reference * gain)
      return both(pair('R1', 'R2', rho, rs, rv), pair('Rf', 'Rg', gain * (1 + rho) - 1))
    }
    case 'weighted-difference': {
      const k = -offset / form.reference
      return both(pair('R2', 'R1', k, 0, rv), pair('R3', 'R4', (1 + k) / gain - 1, rs))
    }
    case 'inverting-up': {
      const h = offset / (form.reference * (1 - gain))
      return both(pair('Rf', 'Rg', -gain, 0, rs), pair('R1', 'R2', 1 / h - 1, rv))
    }
    case 'level-shift': {
      const x = offset / (form.reference * gain)
      const y = edge(1 / gain - 1 - x)
      return star('R1', 1, rs, ['R2', x, rv], ['R3', y, 0], preferred)
    }
    case 'inverting-down':
      return star('Rf', 0, 0, ['Rg', -gain, rs], ['Rs', -offset / form.reference, rv], preferred)
    case 'non-inverting-down': {
      const turns = gain - 1
      const divider = pair('R1', 'R2', (-turns * form.reference) / offset - 1, rv)
      if (!divider || !(turns > 0)) return null
      const thevenin = 1 / (1 / ((divider['R1'] as number) + rv) + 1 / (divider['R2'] as number))
      return { ...divider, Rg: preferred, Rf: turns * (preferred + thevenin) }
    }
    case 'difference':
      return levelled(form.level, gain, offset, factor, preferred, (g) => pair('R2', 'R1', g, 0, rs))
    case 'gain-pair': {
      const { upper, lower } = pairRefs(form)
      const ratio = (g: number): number => (g / (form.stageGain ?? 1) - 1) / (form.factor ?? 2)
      return levelled(form.level, gain, offset, factor, preferred, (g) => pair(upper, lower, ratio(g)))
    }
    case 'gain-single': {
      const inverse = (g: number): number => edge(g / (form.stageGain ?? 1) - 1)
      return levelled(form.level, gain, offset, factor, preferred, (g) => ({ Rg: form.k / inverse(g) }))
    }
    case 'two-amplifier':
      return levelled(form.level, gain, offset, factor, preferred, (g) =>
        form.withGainResistor ? pair('R2', 'Rg', g / 2 - 1) : pair('R2', 'R1', g - 1),
      )
  }
}

/** A gain with its level: both ends fix the gain where a divider makes the level, else one factor has to serve both. */
function levelled(
  level: LevelForm,
  gain: number,
  offset: number,
  factor: (level: number) => number,
  preferred: number,
  size: (gain: number) => Values,
): Values {
  if ('volts' in level) return size(factor(level.volts))
  const { upper, lower } = levelRefs(level)
  const ratio = level.reference / offset - 1
  return both(size(gain), spread(upper, lower, ratio, level.referenceResistance ?? 0, 0, preferred))
}

/** Upper A and lower B with (A + above)/(B + below) = ratio and A·B = preferred². */
function spread(
  upper: string,
  lower: string,
  ratio: number,
  above: number,
  below: number,
  preferred: number,
): Values {
  const wanted = edge(ratio)
  if (!(wanted >= 0)) return null
  if (wanted === 0) return { [upper]: 0, [lower]: Infinity }
  if (wanted === Infinity) return { [upper]: Infinity, [lower]: below > 0 ? preferred : 0 }
  const shift = wanted * below - above
  const root = Math.sqrt(shift * shift + 4 * wanted * preferred * preferred)
  // The larger of the two ways to write the root keeps its digits.
  const b = shift > 0 ? (2 * preferred * preferred) / (shift + root) : (root - shift) / (2 * wanted)
  return { [upper]: (preferred * preferred) / b, [lower]: b }
}

/**
 * One resistor X against two others: (X + own)/(Y + series) = ratio for each. `counts` is 1 where X's series resistance
 * is part of the numerator. The geometric mean of those that exist is the preferred impedance.
 */
function star(
  common: string,
  counts: 0 | 1,
  own: number,
  first: [string, number, number],
  second: [string, number, number],
  preferred: number,
): Values {
  const legs = [first, second].map(([ref, ratio, series]) => ({ ref, ratio: edge(ratio), series }))
  if (!legs.every((leg) => leg.ratio >= 0 && leg.ratio < Infinity)) return null
  const real = legs.filter((leg) => leg.ratio > 0)
  const product = real.reduce((total, leg) => total * leg.ratio, 1)
  const least = Math.max(2 * own * counts, ...real.map((leg) => 2 * leg.ratio * leg.series))
  const x = Math.max(preferred * product ** (1 / (real.length + 1)), least)
  const values: Record<string, number> = { [common]: x - own * counts }
  for (const leg of legs) values[leg.ref] = leg.ratio > 0 ? x / leg.ratio - leg.series : Infinity
  return values
}

function both(first: Values, second: Values): Values {
  return first && second ? { ...first, ...second } : null
}

function edge(ratio: number): number {
  return Math.abs(ratio) < EDGE ? 0 : ratio
}
