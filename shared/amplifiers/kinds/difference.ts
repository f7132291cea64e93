import { leg, ohms } from '../equation.ts'
import { signalEnds } from '../needs.ts'
import { withLevels } from './differential.ts'

/**
 * Four resistors in matched pairs about one amplifier: R1 = R3 from the legs, R2 = R4 to output and level.
 * G = R2/(R1 + source). Its inputs load the source; rejection is (1+G)/(4t) for pairs of tolerance t
 * (method: Franco, Design with Operational Amplifiers, section on difference amplifiers).
 */
export const difference = withLevels({
  id: 'difference',
  title: 'Difference amplifier',
  amplifiers: 1,
  roles: {
    R1: 'Gain, from the − leg',
    R2: 'Gain, feedback',
    R3: 'Gain, from the + leg',
    R4: 'Gain, to the level',
  },
  gainRange: () => ({ minimum: 1e-3, maximum: 1000 }),
  unavailable: () => null,
  needsBiasReturn: false,
  form: (need, _gain, level) => ({
    kind: 'difference',
    signal: signalEnds(need),
    source: need.sourceResistance,
    level,
  }),
  copies: () => ({ R3: 'R1', R4: 'R2' }),
  preset: () => ({}),
  build(stage, values, level) {
    const plus = stage.node('pin_p')
    const minus = stage.node('pin_m')
    const inverting = stage.nodes.n ?? '0'
    stage.resistor('R1', inverting, minus, values.R1)
    stage.resistor('R2', minus, stage.nodes.out, values.R2)
    stage.resistor('R3', stage.nodes.p, plus, values.R3)
    stage.resistor('R4', plus, level, values.R4)
    stage.amplifier(plus, minus, stage.nodes.out)
  },
  gain(values, need) {
    const r1 = leg('R1', values.R1, need.sourceResistance, 'Rsource')
    const r2 = values.R2 ?? 0
    return { symbolic: `R2/${r1.symbolic}`, numeric: `${ohms(r2)}/${r1.numeric}`, value: r2 / r1.value }
  },
})
