/*
 * Output of every arrangement with ideal amplifiers, by node equations written out by hand (no code of the engine): the
 * second, independent calculation that its networks are held against. V, Ω; an absent resistor is open.
 */

export interface Surroundings {
  /** Signal: voltage, or difference between the legs, V. */
  signal: number
  /** Middle of the two legs, V. */
  commonMode: number
  /** Ω, per leg. */
  source: number
  /** Voltage of the reference and its output resistance. */
  reference: number
  referenceResistance: number
  /** Gain constant of the integrated part, Ω. */
  k: number
}

type Values = Record<string, number>

const parallel = (...all: number[]): number => 1 / all.reduce((sum, r) => sum + 1 / r, 0)

/** Voltage of a node that only resistors reach: [voltage behind, resistance] of each. */
const node = (...legs: [number, number][]): number =>
  parallel(...legs.map(([, r]) => r)) * legs.reduce((sum, [v, r]) => sum + v / r, 0)

/** Output at which the currents into a node held at `held` cancel, with `feedback` from the output. */
const balance = (held: number, feedback: number, ...legs: [number, number][]): number =>
  held + feedback * legs.reduce((sum, [v, r]) => sum + (held - v) / r, 0)

const forms: Record<string, (r: Values, a: Surroundings) => number> = {
  direct: (_, a) => a.signal,
  follower: (_, a) => a.signal,
  attenuator: (r, a) => node([a.signal, r.R1! + a.source], [0, r.R2!]),
  'level-shift': (r, a) =>
    node([a.signal, r.R1! + a.source], [a.reference, r.R2! + a.referenceResistance], [0, r.R3 ?? Infinity]),
  'non-inverting': (r, a) => balance(a.signal, r.Rf!, [0, r.Rg!]),
  'non-inverting-up': (r, a) =>
    balance(node([a.signal, r.R1! + a.source], [a.reference, r.R2! + a.referenceResistance]), r.Rf ?? 0, [
      0,
      r.Rg ?? Infinity,
    ]),
  'non-inverting-down': (r, a) => {
    const upper = r.R1! + a.referenceResistance
    return balance(a.signal, r.Rf!, [node([a.reference, upper], [0, r.R2!]), r.Rg! + parallel(upper, r.R2!)])
  },
  'weighted-difference': (r, a) =>
    balance(node([a.signal, r.R3! + a.source], [0, r.R4!]), r.R2!, [
      a.reference,
      r.R1! + a.referenceResistance,
    ]),
  inverting: (r, a) => balance(0, r.Rf!, [a.signal, r.Rg! + a.source]),
  'inverting-up': (r, a) =>
    balance(node([a.reference, r.R1! + a.referenceResistance], [0, r.R2!]), r.Rf!, [
      a.signal,
      r.Rg! + a.source,
    ]),
  'inverting-down': (r, a) =>
    balance(0, r.Rf!, [a.signal, r.Rg! + a.source], [a.reference, r.Rs! + a.referenceResistance]),
  difference: (r, a) => {
    const [minus, plus] = legs(a)
    const held = node([plus, r.R3! + a.source], [levelOf(r, a), r.R4!])
    return balance(held, r.R2!, [minus, r.R1! + a.source])
  },
  'two-amplifier': (r, a) => {
    const [minus, plus] = legs(a)
    const between = r.Rg ?? Infinity
    const first = balance(minus, r.R3!, [levelOf(r, a), r.R4!], [plus, between])
    return balance(plus, r.R2!, [first, r.R1!], [minus, between])
  },
  'three-amplifier': (r, a) => {
    const [minus, plus] = legs(a)
    const first = balance(minus, r.R1!, [plus, r.Rg!])
    const second = balance(plus, r.R2!, [minus, r.Rg!])
    const held = node([second, r.R4!], [levelOf(r, a), r.R6!])
    return balance(held, r.R5!, [first, r.R3!])
  },
  'integrated-instrumentation': (r, a) => a.signal * (1 + a.k / r.Rg!) + levelOf(r, a),
}

const legs = (a: Surroundings): [number, number] => [a.commonMode - a.signal / 2, a.commonMode + a.signal / 2]

/** Level at a reference leg: a divider if there is one, else what the caller put in as `level`. */
const levelOf = (r: Values, a: Surroundings): number =>
  r.R7 === undefined ? (r.level ?? 0) : node([a.reference, r.R7 + a.referenceResistance], [0, r.R8!])

/** Output of an arrangement, V, before filter and converter. Level feeds are told by the id's ending. */
export function closedForm(id: string, values: Values, around: Surroundings): number {
  const base = id.replace(/-(grounded|at-reference)$/, '')
  const form = forms[base]
  if (!form) throw new RangeError(`No closed form is written for ${id}`)
  return form({ ...values, level: id.endsWith('-at-reference') ? around.reference : 0 }, around)
}
