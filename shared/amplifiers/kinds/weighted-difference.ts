import { gainAndOffset, leg, ohms, voltsText } from '../equation.ts'
import { anatomyOf, intercept, refuse, slope, type Arrangement } from '../define.ts'
import { oriented } from '../place.ts'
import { shiftReference, signalEnds, supplyReason } from '../needs.ts'

/**
 * Signal through R3 to the + input with R4 to ground, reference through R1 to the − input, R2 feedback.
 * G = R4/(R3+R4)·(1+R2/R1), b = −Vref·R2/R1; exists for G > 0, b ≤ 0, −b ≥ Vref(G − 1).
 */
export const weightedDifference: Arrangement = {
  id: 'weighted-difference',
  title: 'Weighted difference',
  signal: 'single-ended',
  inverting: false,
  amplifiers: 1,
  roles: {
    R1: 'Offset, from the reference',
    R2: 'Offset and gain, feedback',
    R3: 'Gain, from the signal',
    R4: 'Gain, to ground',
  },
  consider(need) {
    const supply = supplyReason(need)
    if (supply) return { ok: false, reason: supply }
    const reference = shiftReference(need)
    if ('reason' in reference) return { ok: false, reason: reference.reason }
    const target = oriented(need, 1)
    const gain = slope(need, target)
    const offset = intercept(need, target)
    if (offset >= 0)
      return refuse('offset-up', `The offset is ${voltsText(offset)}: this arrangement only shifts down.`, {
        offset,
      })
    const least = reference.voltage * (gain - 1)
    if (-offset < least)
      return refuse(
        'offset-too-small',
        `At a gain of ${gain.toPrecision(4)} it would shift down by at least ${voltsText(least)}; ${voltsText(-offset)} is wanted: the non-inverting amplifier with offset down does that.`,
        { offset, least },
      )
    return {
      ok: true,
      sizing: { target, ...anatomyOf(this, need), dropsOffset: false },
    }
  },
  anatomy(need) {
    if (!need.reference) return null
    return {
      form: {
        kind: 'weighted-difference',
        signal: signalEnds(need),
        source: need.sourceResistance,
        reference: need.reference.voltage,
        referenceResistance: need.reference.resistance,
      },
    }
  },
  build(stage, values) {
    const plus = stage.node('pin_p')
    const minus = stage.node('pin_m')
    stage.resistor('R3', stage.nodes.p, plus, values.R3)
    stage.resistor('R4', plus, '0', values.R4)
    stage.resistor('R1', 'vref', minus, values.R1)
    stage.resistor('R2', minus, stage.nodes.out, values.R2)
    stage.amplifier(plus, minus, stage.nodes.out)
  },
  equations(values, _sizing, need) {
    const v = need.reference?.voltage ?? 0
    const r1 = leg('R1', values.R1, need.reference?.resistance ?? 0, 'Rref')
    const r2 = values.R2 ?? 0
    const r3 = leg('R3', values.R3, need.sourceResistance, 'Rsource')
    const r4 = values.R4 ?? 0
    return gainAndOffset(
      {
        symbolic: `R4/(${r3.symbolic} + R4) × (1 + R2/${r1.symbolic})`,
        numeric: `${ohms(r4)}/(${r3.numeric} + ${ohms(r4)}) × (1 + ${ohms(r2)}/${r1.numeric})`,
        value: (r4 / (r3.value + r4)) * (1 + r2 / r1.value),
      },
      {
        symbolic: `−Vref × R2/${r1.symbolic}`,
        numeric: `−${voltsText(v)} × ${ohms(r2)}/${r1.numeric}`,
        value: (-v * r2) / r1.value,
      },
    )
  },
}
