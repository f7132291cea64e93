import type { AmplifierPart } from '#shared/network/types.ts'
import type { Design, InstrumentationPart } from '#shared/design/schema.ts'
import { ohms } from '../equation.ts'
import { signalEnds, supplyFits } from '../needs.ts'
import { temperatureSpan } from '#shared/design/references.ts'
import type { StageBuilder } from '../stage-builder.ts'
import { withLevels } from './differential.ts'

/**
 * An integrated instrumentation amplifier with one gain resistor: G = 1 + k/Rg, k from the part.
 * Expanded to primitive elements: two input amplifiers with internal resistors k/2 about Rg, and an ideal difference
 * output that rides on the REF pin, whose resistance loads the level.
 */
export const integratedInstrumentation = withLevels({
  id: 'integrated-instrumentation',
  title: 'Integrated instrumentation amplifier',
  amplifiers: 1,
  roles: { Rg: 'Gain' },
  gainRange(need) {
    const part = need.parts.instrumentation
    return { minimum: Math.max(part.gainMinimum, 1.0005), maximum: part.gainMaximum }
  },
  unavailable(need) {
    const part = need.parts.instrumentation
    return supplyFits(
      part.name,
      need.rails.positive - need.rails.negative,
      part.minimumSupply,
      part.maximumSupply,
    )
  },
  needsBiasReturn: true,
  form: (need, _gain, level) => ({
    kind: 'gain-single',
    signal: signalEnds(need),
    k: need.parts.instrumentation.k,
    gainMinimum: need.parts.instrumentation.gainMinimum,
    gainMaximum: need.parts.instrumentation.gainMaximum,
    level,
  }),
  copies: () => ({}),
  preset: () => ({}),
  build(stage, values, level) {
    const part = stage.design.parts.instrumentation
    const gain = values.Rg === undefined ? 1 : 1 + part.k / values.Rg
    const ref = stage.nextDesignator()
    const [gm, gp, xm, xp] = ['rg_m', 'rg_p', 'x_m', 'x_p'].map((n) => stage.node(n)) as [
      string,
      string,
      string,
      string,
    ]
    const inner = innerAmplifier(part, gain)
    // Noise as the part states it, referred to the input: √(enIn² + (enOut/G)²), all of it at the + input.
    const noisy = { ...inner, en: Math.hypot(part.enIn, part.enOut / gain), enCorner: part.enCorner }
    const half = (name: string, p: string, m: string, out: string, halfPart = inner) =>
      stage.network.amplifier({
        ref: `${ref}${name}`,
        p,
        m,
        out,
        vpos: 'vpos',
        vneg: 'vneg',
        part: halfPart,
        macro: ref,
        stage: stage.stage,
      })
    half('A', stage.nodes.n ?? '0', gm, xm)
    half('B', stage.nodes.p, gp, xp, noisy)
    const internal = (name: string, a: string, b: string, value: number, tolerance: number) =>
      stage.network.resistor({
        ref: `R${ref}${name}`,
        a,
        b,
        value,
        tolerance,
        fixed: true,
        group: 'internal',
        noiseless: true,
        stage: stage.stage,
      })
    // The gain error over temperature is a limit on 1 + k/Rg, carried by the two internal resistors.
    const gainError = part.gainError + part.gainDrift * temperatureSpan(stage.design)
    const spread = (gainError * gain) / Math.max(gain - 1, 1e-3)
    internal('A', xm, gm, part.k / 2, Math.min(spread, 0.5))
    internal('B', xp, gp, part.k / 2, Math.min(spread, 0.5))
    stage.resistor('Rg', gm, gp, values.Rg)
    if (level !== '0') internal('R', level, xp, part.refResistance, 0)
    stage.network.controlledVoltageSource({
      ref: `E${ref}`,
      p: stage.nodes.out,
      n: level,
      cp: xp,
      cn: xm,
      gain: 1,
      stage: stage.stage,
    })
    addPins(stage, ref, part, { xm, xp })
    addErrors(stage, ref, part, gain)
  },
  gain(values, need) {
    const k = need.parts.instrumentation.k
    return {
      symbolic: '1 + k/Rg',
      numeric: `1 + ${ohms(k)}/${ohms(values.Rg)}`,
      value: values.Rg === undefined ? 1 : 1 + k / values.Rg,
    }
  },
})

function addPins(
  stage: StageBuilder,
  ref: string,
  part: InstrumentationPart,
  nodes: { xm: string; xp: string },
): void {
  const pin = (
    name: string,
    node: string,
    role: 'input' | 'internal' | 'output',
    low: number,
    high: number,
  ) => stage.pins.push({ name: `${ref} ${name}`, node, stage: stage.stage, role, low, high })
  pin('+ input', stage.nodes.p, 'input', part.inputLow, part.inputHigh)
  pin('− input', stage.nodes.n ?? '0', 'input', part.inputLow, part.inputHigh)
  pin('internal node, + side', nodes.xp, 'internal', part.internalLow, part.internalHigh)
  pin('internal node, − side', nodes.xm, 'internal', part.internalLow, part.internalHigh)
  pin('output', stage.nodes.out, 'output', part.outputLow, part.outputHigh)
}

/** Offsets referred to the input at this gain; rejection interpolated over gain on log axes. */
function addErrors(stage: StageBuilder, ref: string, part: InstrumentationPart, gain: number): void {
  const design: Design = stage.design
  const middle = (design.rails.positive + design.rails.negative) / 2
  stage.errors.push({
    ref: `${ref}B`,
    vos: part.vosIn + part.vosOut / gain,
    vosDrift: part.vosInDrift + part.vosOutDrift / gain,
    bias: part.ib,
    ios: part.ios,
    doubling: 0,
    integrated: {
      part: ref,
      mate: `${ref}A`,
      output: `E${ref}`,
      gain,
      gainError: part.gainError,
      gainDrift: part.gainDrift,
      nonlinearity: part.nonlinearity,
    },
    cmrr: 10 ** (-interpolate(part.cmrr, gain) / 20),
    psrr: 10 ** (-interpolate(part.psrr, gain) / 20),
    reference: middle,
  })
}

/** Table of [gain, figure] on a logarithmic gain axis, held at its ends. */
export function interpolate(table: readonly (readonly [number, number])[], gain: number): number {
  const rows = [...table].sort((a, b) => a[0] - b[0])
  const first = rows[0]
  const last = rows[rows.length - 1]
  if (!first || !last) throw new RangeError('the table of a part over gain is empty')
  if (gain <= first[0]) return first[1]
  if (gain >= last[0]) return last[1]
  const i = rows.findIndex((row) => row[0] >= gain)
  const [g0, f0] = rows[i - 1] ?? first
  const [g1, f1] = rows[i] ?? last
  return f0 + ((f1 - f0) * Math.log(gain / g0)) / Math.log(g1 / g0)
}

/** One half of the input stage: no error of its own, its loop as wide as the part's bandwidth at this gain. */
function innerAmplifier(part: InstrumentationPart, gain: number): AmplifierPart {
  return {
    name: part.name,
    gbw: interpolate(part.bandwidth, gain) * gain,
    a0: 1e9,
    phaseMargin: 60,
    minimumGain: 1,
    rin: part.rin,
    rcm: part.rin,
    cin: { common: part.cin, differential: 0 },
    rout: 1,
    vos: 0,
    vosDrift: 0,
    ib: part.ib,
    ios: part.ios,
    ibDoubling: 0,
    cmrr: 200,
    psrr: 200,
    en: 0,
    enCorner: 0,
    in: part.in,
    inCorner: 0,
    slewRate: part.slewRate,
    inputLow: part.inputLow,
    inputHigh: part.inputHigh,
    outputLow: part.internalLow,
    outputHigh: part.internalHigh,
    outputResistanceLow: 0,
    outputResistanceHigh: 0,
    outputCurrent: 0.01,
    supplyCurrent: part.supplyCurrent,
    minimumSupply: part.minimumSupply,
    maximumSupply: part.maximumSupply,
    absolute: { low: 0.3, high: 0.3, current: 0.01 },
    phaseReversal: false,
    channels: 1,
  }
}
