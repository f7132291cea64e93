import { gainAndOffset, leg, noOffset, ohms, voltsText } from '../equation.ts'
import { anatomyOf, intercept, refuse, slope, type Arrangement, type Need } from '../define.ts'
import { oriented, placeWithOffset } from '../place.ts'
import { shiftReference, signalEnds, supplyReason } from '../needs.ts'

const unity = { minimum: 1, maximum: 1 }

const landsOutside = (need: Need) => {
  const low = Math.min(need.signal.low, need.signal.high)
  const high = Math.max(need.signal.low, need.signal.high)
  return refuse(
    'unity-outside',
    `The signal spans ${voltsText(low)} to ${voltsText(high)}, which does not lie inside the target ${voltsText(Math.min(need.target.low, need.target.high))} to ${voltsText(Math.max(need.target.low, need.target.high))}: it needs gain or offset.`,
    { low, high },
  )
}

/** The sensor straight into the converter: G = 1, b = 0, and no part at all. */
export const direct: Arrangement = {
  id: 'direct',
  title: 'Direct connection',
  signal: 'single-ended',
  inverting: false,
  amplifiers: 0,
  roles: {},
  consider(need) {
    const placed = placeWithOffset(need, 1, 0, unity)
    if (!placed) return landsOutside(need)
    return { ok: true, sizing: { target: placed.target, form: null, dropsOffset: placed.short } }
  },
  anatomy: () => ({ form: null }),
  build() {
    // Nothing stands between sensor and filter.
  },
  equations: () => gainAndOffset({ symbolic: '1', numeric: '1', value: 1 }, noOffset),
}

/** G = 1, b = 0, with a buffer for sources that the converter would load. */
export const follower: Arrangement = {
  id: 'follower',
  title: 'Follower',
  signal: 'single-ended',
  inverting: false,
  amplifiers: 1,
  roles: {},
  consider(need) {
    const supply = supplyReason(need)
    if (supply) return { ok: false, reason: supply }
    const placed = placeWithOffset(need, 1, 0, unity)
    if (!placed) return landsOutside(need)
    return { ok: true, sizing: { target: placed.target, form: null, dropsOffset: placed.short } }
  },
  anatomy: () => ({ form: null }),
  build(stage) {
    stage.amplifier(stage.nodes.p, stage.nodes.out, stage.nodes.out)
  },
  equations: () => gainAndOffset({ symbolic: '1', numeric: '1', value: 1 }, noOffset),
}

/** G = R2/(R1+R2) with R1 from the signal, then a follower; 0 < G < 1, b = 0. */
export const attenuator: Arrangement = {
  id: 'attenuator',
  title: 'Attenuator and follower',
  signal: 'single-ended',
  inverting: false,
  amplifiers: 1,
  roles: { R1: 'Attenuation, upper leg', R2: 'Attenuation, lower leg' },
  consider(need) {
    const supply = supplyReason(need)
    if (supply) return { ok: false, reason: supply }
    const placed = placeWithOffset(need, 1, 0, { minimum: 1e-6, maximum: 0.9995 })
    if (!placed)
      return refuse(
        'no-attenuation',
        'No gain below 1 brings the signal inside the target without an offset.',
      )
    return {
      ok: true,
      sizing: { target: placed.target, ...anatomyOf(this, need), dropsOffset: placed.short },
    }
  },
  anatomy: (need) => ({
    form: { kind: 'attenuator', signal: signalEnds(need), source: need.sourceResistance },
  }),
  build(stage, values) {
    const tap = stage.node('tap')
    stage.resistor('R1', stage.nodes.p, tap, values.R1)
    stage.resistor('R2', tap, '0', values.R2)
    stage.amplifier(tap, stage.nodes.out, stage.nodes.out)
  },
  equations(values, _sizing, need) {
    const r1 = leg('R1', values.R1, need.sourceResistance, 'Rsource')
    const r2 = values.R2 ?? 0
    return gainAndOffset(
      {
        symbolic: `R2/(${r1.symbolic} + R2)`,
        numeric: `${ohms(r2)}/(${r1.numeric} + ${ohms(r2)})`,
        value: r2 / (r1.value + r2),
      },
      noOffset,
    )
  },
}

/**
 * Three resistors into one node: R1 from the signal, R2 from the reference, R3 to ground, then a follower.
 * G = (R2∥R3)/(R1 + R2∥R3), b = Vref·(R1∥R3)/(R2 + R1∥R3); exists for G > 0, b > 0, G + b/Vref < 1.
 */
export const levelShift: Arrangement = {
  id: 'level-shift',
  title: 'Attenuating level shift and follower',
  signal: 'single-ended',
  inverting: false,
  amplifiers: 1,
  roles: { R1: 'From the signal', R2: 'From the reference', R3: 'To ground' },
  consider(need) {
    const supply = supplyReason(need)
    if (supply) return { ok: false, reason: supply }
    const reference = shiftReference(need)
    if ('reason' in reference) return { ok: false, reason: reference.reason }
    const target = oriented(need, 1)
    const gain = slope(need, target)
    const offset = intercept(need, target)
    const sum = gain + offset / reference.voltage
    if (offset <= 0)
      return refuse('offset-down', `The offset is ${voltsText(offset)}: this arrangement only shifts up.`, {
        offset,
      })
    if (sum >= 1)
      return refuse(
        'sum-above-one',
        `Gain plus offset over reference is ${sum.toFixed(3)}: three resistors alone reach less than 1, so an amplifier with gain is needed.`,
        { sum },
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
        kind: 'level-shift',
        signal: signalEnds(need),
        source: need.sourceResistance,
        reference: need.reference.voltage,
        referenceResistance: need.reference.resistance,
      },
    }
  },
  build(stage, values) {
    const mix = stage.node('mix')
    stage.resistor('R1', stage.nodes.p, mix, values.R1)
    stage.resistor('R2', 'vref', mix, values.R2)
    stage.resistor('R3', mix, '0', values.R3)
    stage.amplifier(mix, stage.nodes.out, stage.nodes.out)
  },
  equations(values, _sizing, need) {
    const r1 = leg('R1', values.R1, need.sourceResistance, 'Rsource')
    const r2 = leg('R2', values.R2, need.reference?.resistance ?? 0, 'Rref')
    const r3 = values.R3
    const parallel = (r: number) => (r3 === undefined ? r : (r * r3) / (r + r3))
    const beside = (r: string) => (r3 === undefined ? r : `${r} || R3`)
    const v = need.reference?.voltage ?? 0
    const lower = parallel(r2.value)
    const other = parallel(r1.value)
    return gainAndOffset(
      {
        symbolic: `(${beside(r2.symbolic)})/(${r1.symbolic} + ${beside(r2.symbolic)})`,
        numeric: `${ohms(lower)}/(${r1.numeric} + ${ohms(lower)})`,
        value: lower / (r1.value + lower),
      },
      {
        symbolic: `Vref × (${beside(r1.symbolic)})/(${r2.symbolic} + ${beside(r1.symbolic)})`,
        numeric: `${voltsText(v)} × ${ohms(other)}/(${r2.numeric} + ${ohms(other)})`,
        value: (v * other) / (r2.value + other),
      },
    )
  },
}
