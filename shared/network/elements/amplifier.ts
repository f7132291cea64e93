import { complex, divideComplex } from '#shared/numerics/complex.ts'
import { GROUND } from '../types.ts'
import type { Amplifier, AmplifierPart } from '../types.ts'
import { stampAdmittance } from './admittance.ts'
import type { ElementKind, NoiseSource, PortContext, Stamper } from './element-kind.ts'
import { toSpiceNumber } from './spice-number.ts'

/*
 * Operational amplifier. With i the current delivered into `out`, A(s) = a0/(1 + s·a0/(2π·gbw)) and Vos at the + pin:
 *
 *   real    v_p − v_m − (1/A)·(v_out + rout·i) = −Vos,   1/A = 1/a0 + s/(2π·gbw)
 *   ideal   v_p − v_m                          = −Vos    (nullor)
 *
 * The real row is v_out + rout·i = A·(v_p − v_m + Vos) divided by −A. Without that division the row's entries of 1e6
 * cost five digits of every answer; with it the row tends to the nullor's as a0 grows.
 * rin lies between the pins, rcm and cin.common from each pin to ground; ib flows into each pin.
 */
export const amplifier: ElementKind<Amplifier> = {
  letter: null,
  nodes: (e) => [e.p, e.m, e.out],
  hasBranch: true,
  dcPaths: (e, model) =>
    model === 'ideal'
      ? [[e.out, GROUND]]
      : [
          [e.out, GROUND],
          [e.p, e.m],
          [e.p, GROUND],
          [e.m, GROUND],
        ],
  stamp: (e, stamper) => {
    const branch = stampOutput(e, stamper)
    stamper.add(branch, stamper.node(e.p), 1)
    stamper.add(branch, stamper.node(e.m), -1)
    if (stamper.model === 'ideal') return
    const { a0, gbw, rout } = e.part
    const inverse = 1 / a0
    const slope = 1 / (2 * Math.PI * gbw)
    stamper.add(branch, stamper.node(e.out), -inverse, -slope)
    stamper.add(branch, branch, -rout * inverse, -rout * slope)
    stampInputs(e, stamper)
  },
  ports: {
    vos: (e, stamper) => stamper.addSource(stamper.branch(e.ref), -1),
    'ib+': (e, stamper) => stamper.addSource(stamper.node(e.p), -1),
    'ib-': (e, stamper) => stamper.addSource(stamper.node(e.m), -1),
    // v_p(1 + x/2) − v_m(1 − x/2) = x·V0
    cmrr: (e, stamper, context) => {
      const branch = stamper.branch(e.ref)
      stamper.add(branch, stamper.node(e.p), 0.5)
      stamper.add(branch, stamper.node(e.m), 0.5)
      stamper.addSource(branch, commonModeReference(e, context))
    },
    // −(1/A)·(v_out + rout·i)
    loopGain: (e, stamper) => {
      const branch = stamper.branch(e.ref)
      stamper.add(branch, stamper.node(e.out), -1)
      if (stamper.model === 'real') stamper.add(branch, branch, -e.part.rout)
    },
  },
  value: () => null,
  conductance: () => null,
  withValue: (e) => {
    throw new RangeError(`${e.ref} is an amplifier: it has no single value that could be set`)
  },
  check: (e) => checkPart(e.ref, e.part),
  loop: {
    stamp: (e, stamper) => {
      const branch = stampOutput(e, stamper)
      stamper.add(branch, stamper.node(e.out), 1)
      stamper.add(branch, branch, e.part.rout)
      stamper.addSource(branch, 1, 1)
      stampInputs(e, stamper)
    },
    gain: (e, omega, poles) => {
      const first = divideComplex(complex(1), complex(1 / e.part.a0, omega / (2 * Math.PI * e.part.gbw)))
      const second = poles === 2 ? secondPole(e.part) : Infinity
      return divideComplex(first, complex(1, omega / (2 * Math.PI * second)))
    },
    inputs: (e) => ({ p: e.p, m: e.m }),
  },
  noise: (e) => {
    const { en, enCorner, in: current, inCorner } = e.part
    const voltage: NoiseSource = {
      name: 'en',
      density: en ** 2,
      corner: enCorner,
      inject: (stamper) => stamper.addSource(stamper.branch(e.ref), -1),
    }
    const into = (name: string, node: string): NoiseSource => ({
      name,
      density: current ** 2,
      corner: inCorner,
      inject: (stamper) => stamper.addSource(stamper.node(node), -1),
    })
    // the − input of an integrated part's half is inside it: nothing enters there that its figures do not count
    const inputs = e.macro ? [into('in+', e.p)] : [into('in+', e.p), into('in-', e.m)]
    return [voltage, ...inputs].filter((source) => source.density > 0)
  },
  toSpice,
  symbol: 'amplifier',
}

/**
 * Frequency of the second pole, Hz, with which the bare amplifier has its stated phase margin φ where its own gain is
 * one, fu. With δ short of a right angle by the first pole there:
 *
 *   |A(fu)| = a0·sin δ·sin(φ − δ) = 1,   fu = gbw/(a0·tan δ),   f2 = fu·tan(φ − δ)
 *
 * For a large a0 that is fu = gbw·sin φ, f2 = fu·tan φ. A margin smaller than two poles can leave at this a0 gives two
 * equal ones, which leave the least.
 */
export function secondPole({ a0, gbw, phaseMargin }: AmplifierPart): number {
  const margin = (phaseMargin * Math.PI) / 180
  let short = 0
  for (let turn = 0; turn < 50; turn++) {
    const sine = 1 / (a0 * Math.sin(margin - short))
    short = Math.min(Math.asin(Math.min(sine, 1)), margin / 2)
  }
  return (gbw / (a0 * Math.tan(short))) * Math.tan(margin - short)
}

/** Common mode at which Vos is given, V: as stated, the part's own, or mid-rail. */
function commonModeReference(e: Amplifier, { reference, voltage }: PortContext): number {
  const stated = reference ?? e.part.vosCommonMode
  if (stated !== undefined) return stated
  if (voltage) return (voltage(e.vpos) + voltage(e.vneg)) / 2
  throw new RangeError(`${e.ref}: state the common mode at which its offset is given`)
}

function stampOutput(e: Amplifier, stamper: Stamper): number {
  const branch = stamper.branch(e.ref)
  stamper.add(stamper.node(e.out), branch, -1)
  return branch
}

function stampInputs(e: Amplifier, stamper: Stamper): void {
  const { rin, rcm, cin, ib } = e.part
  stampAdmittance(stamper, e.p, e.m, 1 / rin, cin.differential)
  stampAdmittance(stamper, e.p, GROUND, 1 / rcm, cin.common)
  stampAdmittance(stamper, e.m, GROUND, 1 / rcm, cin.common)
  stamper.addSource(stamper.node(e.p), -ib)
  stamper.addSource(stamper.node(e.m), -ib)
}

function checkPart(ref: string, part: AmplifierPart): string | null {
  const above = ['a0', 'gbw', 'rin', 'rcm'] as const
  for (const key of above) {
    if (!(part[key] > 0)) return `${ref} has ${key} ${part[key]}; it needs a value above 0`
  }
  const figures = {
    rout: part.rout,
    'cin.common': part.cin.common,
    'cin.differential': part.cin.differential,
  }
  for (const [key, value] of Object.entries(figures)) {
    if (!(value >= 0)) return `${ref} has ${key} ${value}; it needs 0 or more`
  }
  return null
}

/**
 * The same nominal model: a transconductance of 1 S into a0 ohms gives a0 exactly at DC with entries of the order of
 * one, and the capacitor 1/(2π·gbw) beside it the single pole.
 */
function toSpice(e: Amplifier): string[] {
  const { a0, gbw, rin, rcm, cin, rout, ib } = e.part
  const gain = `${e.ref}__a`
  const source = rout > 0 ? `${e.ref}__o` : e.out
  const lines = [
    `* ${e.ref} (+ ${e.p}, - ${e.m}, out ${e.out})`,
    `G_${e.ref} 0 ${gain} ${e.p} ${e.m} 1`,
    `R_${e.ref}_A ${gain} 0 ${toSpiceNumber(a0)}`,
    `C_${e.ref}_A ${gain} 0 ${toSpiceNumber(1 / (2 * Math.PI * gbw))}`,
    `E_${e.ref} ${source} 0 ${gain} 0 1`,
  ]
  if (rout > 0) lines.push(`R_${e.ref}_O ${source} ${e.out} ${toSpiceNumber(rout)}`)
  lines.push(`R_${e.ref}_D ${e.p} ${e.m} ${toSpiceNumber(rin)}`)
  if (cin.differential > 0) lines.push(`C_${e.ref}_D ${e.p} ${e.m} ${toSpiceNumber(cin.differential)}`)
  for (const [sign, pin] of [
    ['P', e.p],
    ['M', e.m],
  ] as const) {
    lines.push(`R_${e.ref}_${sign} ${pin} 0 ${toSpiceNumber(rcm)}`)
    if (cin.common > 0) lines.push(`C_${e.ref}_${sign} ${pin} 0 ${toSpiceNumber(cin.common)}`)
    lines.push(`I_${e.ref}_${sign} ${pin} 0 DC ${toSpiceNumber(ib)}`)
  }
  return lines
}
