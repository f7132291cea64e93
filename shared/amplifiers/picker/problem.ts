import { type LevelForm, levelRefs, type Pair, pairRefs, type ValueForm } from './forms.ts'

/**
 * The one shape that every form has for the search: u_i = p_i + β·d_i at the ends i = 0, 1. p and d depend on the ratio
 * r of a first pair of resistors alone, β on the rest.
 */
export interface Problem {
  /** First pair; null where the form has one free factor only. */
  alpha: PairLegs | null
  lines: Lines
  ideal: IdealRatio | null
  beta: Beta
}

/** r = (upper + above)/(lower + below), refs and series resistances in Ω; a number in place of a ref is a fixed resistor. */
export interface PairLegs {
  upper: string | number
  lower: string
  above: number
  below: number
}

/** p_i = pa_i + pb_i·m and d_i = da_i + db_i·m with m = r, or m = 1/(1 + r) where `inverse`. Volts. */
export interface Lines {
  inverse: boolean
  pa: Pair
  pb: Pair
  da: Pair
  db: Pair
}

/**
 * The r whose line meets an output (u0, u1): m = (n·u + n2)/(e·u + e2), r = m, or r = 1/m − 1 where `inverse`.
 * It need not be the m of `Lines`: the chart is chosen so that the denominator keeps its sign as long as possible.
 */
export interface IdealRatio {
  inverse: boolean
  n: [number, number, number]
  e: [number, number, number]
}

/**
 * How β follows from the rest:
 * - `pair`: ratio q of a second pair, β = f0 + f1·q, or 1/(1 + q) where `divider`;
 * - `shared`: one further resistor X against the first pair's upper leg A, q = (A + own)/(X + series): β = q, or
 *   1/(1 + r + q) where `divider`;
 * - `loaded`: β = A/(B + Thevenin resistance of the first pair), refs A and B.
 */
export type Beta =
  | { kind: 'pair'; legs: PairLegs; divider: boolean; f0: number; f1: number }
  | { kind: 'shared'; ref: string; own: number; series: number; divider: boolean }
  | { kind: 'loaded'; upper: string; lower: string }

const ZERO: Pair = [0, 0]

/** Casts a form into the shape of the search. */
export function toProblem(form: ValueForm): Problem {
  const s = form.signal
  const [s0, s1] = s
  const rs = form.source ?? 0
  const rv = 'referenceResistance' in form ? (form.referenceResistance ?? 0) : 0
  const minus: Pair = [-s0, -s1]

  switch (form.kind) {
    case 'attenuator':
      return single(s, 0, divider(legs('R1', 'R2', rs)))
    case 'non-inverting':
      return single(s, 0, affine(legs('Rf', 'Rg'), 1))
    case 'inverting':
      return single(minus, 0, affine(legs('Rf', 'Rg', 0, rs), 0))
    case 'level-shift': {
      const v = form.reference
      return {
        alpha: legs('R1', 'R2', rs, rv),
        lines: { inverse: false, pa: ZERO, pb: ZERO, da: s, db: [v, v] },
        ideal: { inverse: false, n: [s1, -s0, 0], e: [-v, v, 0] },
        beta: { kind: 'shared', ref: 'R3', own: rs, series: 0, divider: true },
      }
    }
    case 'non-inverting-up': {
      const v = form.reference
      return {
        alpha: legs('R1', 'R2', rs, rv),
        lines: { inverse: true, pa: ZERO, pb: ZERO, da: [v, v], db: [s0 - v, s1 - v] },
        ideal: { inverse: false, n: [s1, -s0, 0], e: [-v, v, 0] },
        beta: affine(legs('Rf', 'Rg'), 1),
      }
    }
    case 'non-inverting-down': {
      const v = form.reference
      return {
        alpha: legs('R1', 'R2', rv),
        lines: { inverse: true, pa: s, pb: ZERO, da: s, db: [-v, -v] },
        ideal: { inverse: true, n: [-s1, s0, 0], e: [-v, v, v * (s0 - s1)] },
        beta: { kind: 'loaded', upper: 'Rf', lower: 'Rg' },
      }
    }
    case 'weighted-difference': {
      const v = form.reference
      return {
        alpha: legs('R3', 'R4', rs),
        lines: { inverse: true, pa: ZERO, pb: s, da: [-v, -v], db: s },
        ideal: { inverse: false, n: [s1 - v, v - s0, v * (s0 - s1)], e: [v, -v, 0] },
        beta: affine(legs('R2', 'R1', 0, rv), 0),
      }
    }
    case 'inverting-up': {
      const v = form.reference
      return {
        alpha: legs('Rf', 'Rg', 0, rs),
        lines: { inverse: false, pa: ZERO, pb: minus, da: [v, v], db: [v, v] },
        ideal: { inverse: false, n: [1, -1, 0], e: [0, 0, s1 - s0] },
        beta: divider(legs('R1', 'R2', rv)),
      }
    }
    case 'inverting-down': {
      const v = form.reference
      return {
        alpha: legs('Rf', 'Rg', 0, rs),
        lines: { inverse: false, pa: ZERO, pb: minus, da: [-v, -v], db: ZERO },
        ideal: { inverse: false, n: [1, -1, 0], e: [0, 0, s1 - s0] },
        beta: { kind: 'shared', ref: 'Rs', own: 0, series: rv, divider: false },
      }
    }
    case 'difference':
      return levelled(form.level, s, legs('R2', 'R1', 0, rs), 0, 1)
    case 'gain-pair': {
      const { upper, lower } = pairRefs(form)
      const stage = form.stageGain ?? 1
      return levelled(form.level, s, legs(upper, lower), stage, stage * (form.factor ?? 2))
    }
    case 'gain-single': {
      const stage = form.stageGain ?? 1
      return levelled(form.level, s, legs(form.k, 'Rg'), stage, stage)
    }
    case 'two-amplifier':
      return form.withGainResistor
        ? levelled(form.level, s, legs('R2', 'Rg'), 2, 2)
        : levelled(form.level, s, legs('R2', 'R1'), 1, 1)
  }
}

/** u = s·(g0 + g1·r) + level, r the ratio of `pair`. */
function levelled(level: LevelForm, s: Pair, pair: PairLegs, g0: number, g1: number): Problem {
  if ('volts' in level)
    return single(s, level.volts, { kind: 'pair', legs: pair, divider: false, f0: g0, f1: g1 })
  const { upper, lower } = levelRefs(level)
  const v = level.reference
  const slope = g1 * (s[1] - s[0])
  return {
    alpha: pair,
    lines: {
      inverse: false,
      pa: [g0 * s[0], g0 * s[1]],
      pb: [g1 * s[0], g1 * s[1]],
      da: [v, v],
      db: ZERO,
    },
    ideal: { inverse: false, n: [-1, 1, g0 * (s[0] - s[1])], e: [0, 0, slope] },
    beta: divider(legs(upper, lower, level.referenceResistance ?? 0)),
  }
}

/** u = level + d·β: one free factor. */
function single(d: Pair, level: number, beta: Beta): Problem {
  return {
    alpha: null,
    lines: { inverse: false, pa: [level, level], pb: ZERO, da: d, db: ZERO },
    ideal: null,
    beta,
  }
}

function legs(upper: string | number, lower: string, above = 0, below = 0): PairLegs {
  return { upper, lower, above, below }
}

function affine(pair: PairLegs, f0: number): Beta {
  return { kind: 'pair', legs: pair, divider: false, f0, f1: 1 }
}

function divider(pair: PairLegs): Beta {
  return { kind: 'pair', legs: pair, divider: true, f0: 0, f1: 0 }
}
