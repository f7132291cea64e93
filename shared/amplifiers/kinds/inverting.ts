import { gainAndOffset, leg, noOffset, ohms, voltsText, type Leg } from '../equation.ts'
import { anatomyOf, intercept, refuse, slope, type Arrangement } from '../define.ts'
import { oriented, placeWithOffset } from '../place.ts'
import { shiftReference, signalEnds, supplyReason } from '../needs.ts'

/** G = −Rf/Rg, b = 0. One rail is enough where the signal is wholly at or below 0 V. */
export const inverting: Arrangement = {
  id: 'inverting',
  title: 'Inverting amplifier',
  signal: 'single-ended',
  inverting: true,
  amplifiers: 1,
  roles: { Rf: 'Gain, feedback', Rg: 'Gain, from the signal' },
  consider(need) {
    const supply = supplyReason(need)
    if (supply) return { ok: false, reason: supply }
    const placed = placeWithOffset(need, -1, 0, { minimum: 1e-4, maximum: 1e6 })
    if (!placed)
      return refuse(
        'no-gain-lands',
        'No negative gain brings the whole signal inside the target without an offset.',
        { offset: intercept(need, oriented(need, -1)) },
      )
    return {
      ok: true,
      sizing: { target: placed.target, ...anatomyOf(this, need), dropsOffset: placed.short },
    }
  },
  anatomy: (need) => ({
    form: { kind: 'inverting', signal: signalEnds(need), source: need.sourceResistance },
  }),
  build(stage, values) {
    const sum = stage.node('sum')
    stage.resistor('Rg', stage.nodes.p, sum, values.Rg)
    stage.resistor('Rf', stage.nodes.out, sum, values.Rf)
    stage.amplifier('0', sum, stage.nodes.out)
  },
  equations(values, _sizing, need) {
    const rg = leg('Rg', values.Rg, need.sourceResistance, 'Rsource')
    return gainAndOffset(inputGain(values.Rf ?? 0, rg), noOffset)
  },
}

/**
 * + input at a divider of the reference. G = −Rf/Rg, b = Vref·R2/(R1+R2)·(1+Rf/Rg);
 * exists for G < 0, 0 < b ≤ Vref(1+|G|).
 */
export const invertingUp: Arrangement = {
  id: 'inverting-up',
  title: 'Inverting amplifier, offset up',
  signal: 'single-ended',
  inverting: true,
  amplifiers: 1,
  roles: {
    Rf: 'Gain, feedback',
    Rg: 'Gain, from the signal',
    R1: 'Level, upper leg',
    R2: 'Level, lower leg',
  },
  consider(need) {
    const supply = supplyReason(need)
    if (supply) return { ok: false, reason: supply }
    const reference = shiftReference(need)
    if ('reason' in reference) return { ok: false, reason: reference.reason }
    const target = oriented(need, -1)
    const gain = slope(need, target)
    const offset = intercept(need, target)
    if (offset <= 0)
      return refuse('offset-down', `The offset is ${voltsText(offset)}: this arrangement only shifts up.`, {
        offset,
      })
    const most = reference.voltage * (1 - gain)
    if (offset > most)
      return refuse(
        'offset-too-large',
        `The offset of ${voltsText(offset)} is more than the reference gives at this gain (${voltsText(most)}): a higher reference reaches it.`,
        { offset, most },
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
        kind: 'inverting-up',
        signal: signalEnds(need),
        source: need.sourceResistance,
        reference: need.reference.voltage,
        referenceResistance: need.reference.resistance,
      },
    }
  },
  build(stage, values) {
    const sum = stage.node('sum')
    const level = stage.node('lvl')
    stage.resistor('Rg', stage.nodes.p, sum, values.Rg)
    stage.resistor('Rf', stage.nodes.out, sum, values.Rf)
    stage.resistor('R1', 'vref', level, values.R1)
    stage.resistor('R2', level, '0', values.R2)
    stage.amplifier(level, sum, stage.nodes.out)
  },
  equations(values, _sizing, need) {
    const v = need.reference?.voltage ?? 0
    const r1 = leg('R1', values.R1, need.reference?.resistance ?? 0, 'Rref')
    const r2 = values.R2 ?? 0
    const rg = leg('Rg', values.Rg, need.sourceResistance, 'Rsource')
    const rf = values.Rf ?? 0
    return gainAndOffset(inputGain(rf, rg), {
      symbolic: `Vref × R2/(${r1.symbolic} + R2) × (1 + Rf/${rg.symbolic})`,
      numeric: `${voltsText(v)} × ${ohms(r2)}/(${r1.numeric} + ${ohms(r2)}) × (1 + ${ohms(rf)}/${rg.numeric})`,
      value: ((v * r2) / (r1.value + r2)) * (1 + rf / rg.value),
    })
  },
}

/**
 * Reference summed in through Rs. G = −Rf/Rg, b = −Vref·Rf/Rs; exists for G < 0, b < 0.
 * On one rail only where every s ≤ b/|G|.
 */
export const invertingDown: Arrangement = {
  id: 'inverting-down',
  title: 'Inverting amplifier, offset down',
  signal: 'single-ended',
  inverting: true,
  amplifiers: 1,
  roles: { Rf: 'Gain, feedback', Rg: 'Gain, from the signal', Rs: 'Offset, from the reference' },
  consider(need) {
    const supply = supplyReason(need)
    if (supply) return { ok: false, reason: supply }
    const reference = shiftReference(need)
    if ('reason' in reference) return { ok: false, reason: reference.reason }
    const target = oriented(need, -1)
    const offset = intercept(need, target)
    if (offset >= 0)
      return refuse('offset-up', `The offset is ${voltsText(offset)}: this arrangement only shifts down.`, {
        offset,
      })
    return {
      ok: true,
      sizing: { target, ...anatomyOf(this, need), dropsOffset: false },
    }
  },
  anatomy(need) {
    if (!need.reference) return null
    return {
      form: {
        kind: 'inverting-down',
        signal: signalEnds(need),
        source: need.sourceResistance,
        reference: need.reference.voltage,
        referenceResistance: need.reference.resistance,
      },
    }
  },
  build(stage, values) {
    const sum = stage.node('sum')
    stage.resistor('Rg', stage.nodes.p, sum, values.Rg)
    stage.resistor('Rs', 'vref', sum, values.Rs)
    stage.resistor('Rf', stage.nodes.out, sum, values.Rf)
    stage.amplifier('0', sum, stage.nodes.out)
  },
  equations(values, _sizing, need) {
    const v = need.reference?.voltage ?? 0
    const rs = leg('Rs', values.Rs, need.reference?.resistance ?? 0, 'Rref')
    const rg = leg('Rg', values.Rg, need.sourceResistance, 'Rsource')
    const rf = values.Rf ?? 0
    return gainAndOffset(inputGain(rf, rg), {
      symbolic: `−Vref × Rf/${rs.symbolic}`,
      numeric: `−${voltsText(v)} × ${ohms(rf)}/${rs.numeric}`,
      value: (-v * rf) / rs.value,
    })
  },
}

/** −Rf over the leg from the signal. */
function inputGain(rf: number, rg: Leg): Leg {
  return { symbolic: `−Rf/${rg.symbolic}`, numeric: `−${ohms(rf)}/${rg.numeric}`, value: -rf / rg.value }
}
