import { ohms } from '../equation.ts'
import { signalEnds } from '../needs.ts'
import { withLevels } from './differential.ts'

/**
 * Two amplifiers: level–R4–(−U1)–R3–out U1–R1–(−U2)–R2–out, Rg between the − pins, R3 = R1 and R4 = R2.
 * G = 1 + R2/R1 + 2·R2/Rg. The first amplifier's output limits the common mode at low gain.
 */
export const twoAmplifier = withLevels({
  id: 'two-amplifier',
  title: 'Two-amplifier instrumentation amplifier',
  amplifiers: 2,
  roles: {
    R1: 'Gain, second amplifier',
    R2: 'Gain, second amplifier, feedback',
    R3: 'Gain, first amplifier, feedback',
    R4: 'Gain, first amplifier, to the level',
    Rg: 'Gain, between the amplifiers',
  },
  gainRange: () => ({ minimum: 1.0005, maximum: 1000 }),
  unavailable: () => null,
  needsBiasReturn: true,
  form: (need, gain, level) => ({
    kind: 'two-amplifier',
    signal: signalEnds(need),
    level,
    withGainResistor: gain > 2.0005,
  }),
  copies: (gain): Record<string, string> =>
    gain > 2.0005 ? { R1: 'R2', R3: 'R2', R4: 'R2' } : { R3: 'R1', R4: 'R2' },
  preset: () => ({}),
  build(stage, values, level) {
    const minus1 = stage.node('m1')
    const minus2 = stage.node('m2')
    const out1 = stage.node('o1')
    stage.amplifier(stage.nodes.n ?? '0', minus1, out1)
    stage.amplifier(stage.nodes.p, minus2, stage.nodes.out)
    stage.resistor('R4', level, minus1, values.R4)
    stage.resistor('R3', minus1, out1, values.R3)
    stage.resistor('R1', out1, minus2, values.R1)
    stage.resistor('R2', minus2, stage.nodes.out, values.R2)
    stage.resistor('Rg', minus1, minus2, values.Rg)
  },
  gain(values) {
    const r1 = values.R1 ?? values.R2 ?? 1
    const r2 = values.R2 ?? 0
    if (values.Rg === undefined)
      return { symbolic: '1 + R2/R1', numeric: `1 + ${ohms(r2)}/${ohms(r1)}`, value: 1 + r2 / r1 }
    return {
      symbolic: '1 + R2/R1 + 2·R2/Rg',
      numeric: `1 + ${ohms(r2)}/${ohms(r1)} + 2 × ${ohms(r2)}/${ohms(values.Rg)}`,
      value: 1 + r2 / r1 + (2 * r2) / values.Rg,
    }
  },
})

/**
 * Three amplifiers: U1 and U2 with R1 = R2 about Rg, then a unity difference stage R3 = R4 = R5 = R6 around U3.
 * G = (1 + 2·R1/Rg)·R5/R3. Each first-stage output carries common mode ∓ (d/2)(1 + 2·R1/Rg).
 */
export const threeAmplifier = withLevels({
  id: 'three-amplifier',
  title: 'Three-amplifier instrumentation amplifier',
  amplifiers: 3,
  roles: {
    R1: 'Gain, first stage',
    R2: 'Gain, first stage',
    Rg: 'Gain, between the legs',
    R3: 'Second stage, from the − side',
    R4: 'Second stage, from the + side',
    R5: 'Second stage, feedback',
    R6: 'Second stage, to the level',
  },
  gainRange: () => ({ minimum: 1.0005, maximum: 10000 }),
  unavailable: () => null,
  needsBiasReturn: true,
  form: (need, _gain, level) => ({
    kind: 'gain-pair',
    signal: signalEnds(need),
    level,
  }),
  copies: () => ({ R2: 'R1', R4: 'R3', R5: 'R3', R6: 'R5' }),
  preset: (need) => ({ R3: need.parts.resistors.preferred }),
  build(stage, values, level) {
    const [minus1, minus2, out1, out2] = ['m1', 'm2', 'o1', 'o2'].map((n) => stage.node(n)) as [
      string,
      string,
      string,
      string,
    ]
    const plus = stage.node('pin_p')
    const minus = stage.node('pin_m')
    stage.amplifier(stage.nodes.n ?? '0', minus1, out1)
    stage.amplifier(stage.nodes.p, minus2, out2)
    stage.resistor('R1', out1, minus1, values.R1)
    stage.resistor('R2', out2, minus2, values.R2)
    stage.resistor('Rg', minus1, minus2, values.Rg)
    stage.resistor('R3', out1, minus, values.R3)
    stage.resistor('R5', minus, stage.nodes.out, values.R5)
    stage.resistor('R4', out2, plus, values.R4)
    stage.resistor('R6', plus, level, values.R6)
    stage.amplifier(plus, minus, stage.nodes.out)
  },
  gain(values) {
    const first = 1 + (2 * (values.R1 ?? 0)) / (values.Rg ?? Infinity)
    const second = (values.R5 ?? 1) / (values.R3 ?? 1)
    return {
      symbolic: '(1 + 2·R1/Rg) × R5/R3',
      numeric: `(1 + 2 × ${ohms(values.R1)}/${ohms(values.Rg)}) × ${ohms(values.R5)}/${ohms(values.R3)}`,
      value: first * second,
    }
  },
})
