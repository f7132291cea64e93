import { gainAndOffset, leg, noOffset, ohms, voltsText } from '../equation.ts'
import { anatomyOf, intercept, refuse, slope, type Arrangement } from '../define.ts'
import { oriented, placeWithOffset } from '../place.ts'
import { shiftReference, signalEnds, supplyReason } from '../needs.ts'

/** G = 1 + Rf/Rg, b = 0. Method: the amplifier holds its − input, the tap of Rf and Rg, at the signal. */
export const nonInverting: Arrangement = {
  id: 'non-inverting',
  title: 'Non-inverting amplifier',
  signal: 'single-ended',
  inverting: false,
  amplifiers: 1,
  roles: { Rf: 'Gain, feedback', Rg: 'Gain, to ground' },
  consider(need) {
    const supply = supplyReason(need)
    if (supply) return { ok: false, reason: supply }
    const placed = placeWithOffset(need, 1, 0, { minimum: 1.0005, maximum: 1e6 })
    if (!placed)
      return refuse(
        'no-gain-lands',
        'No gain above 1 brings the whole signal inside the target without an offset.',
        { offset: intercept(need, oriented(need, 1)) },
      )
    return {
      ok: true,
      sizing: { target: placed.target, ...anatomyOf(this, need), dropsOffset: placed.short },
    }
  },
  anatomy: (need) => ({ form: { kind: 'non-inverting', signal: signalEnds(need) } }),
  build(stage, values) {
    const tap = stage.node('fb')
    stage.amplifier(stage.nodes.p, tap, stage.nodes.out)
    stage.resistor('Rf', stage.nodes.out, tap, values.Rf)
    stage.resistor('Rg', tap, '0', values.Rg)
  },
  equations(values) {
    const ratio = (values.Rf ?? 0) / (values.Rg ?? Infinity)
    return gainAndOffset(
      { symbolic: '1 + Rf/Rg', numeric: `1 + ${ohms(values.Rf)}/${ohms(values.Rg)}`, value: 1 + ratio },
      noOffset,
    )
  },
}

/**
 * Signal through R1 and reference through R2 mixed at the + input, gain 1 + Rf/Rg after it.
 * G = R2/(R1+R2)·(1+Rf/Rg), b = Vref·R1/(R1+R2)·(1+Rf/Rg); exists for G > 0, b > 0, G + b/Vref ≥ 1.
 */
export const nonInvertingUp: Arrangement = {
  id: 'non-inverting-up',
  title: 'Non-inverting amplifier, offset up',
  signal: 'single-ended',
  inverting: false,
  amplifiers: 1,
  roles: {
    R1: 'Offset, from the signal',
    R2: 'Offset, from the reference',
    Rf: 'Gain, feedback',
    Rg: 'Gain, to ground',
  },
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
    if (sum < 1)
      return refuse(
        'sum-below-one',
        `Gain plus offset over reference is ${sum.toFixed(3)}, below 1: an attenuating level shift does it without gain.`,
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
        kind: 'non-inverting-up',
        signal: signalEnds(need),
        source: need.sourceResistance,
        reference: need.reference.voltage,
        referenceResistance: need.reference.resistance,
      },
    }
  },
  build(stage, values) {
    const mix = stage.node('mix')
    const out = stage.nodes.out
    stage.resistor('R1', stage.nodes.p, mix, values.R1)
    stage.resistor('R2', 'vref', mix, values.R2)
    if (values.Rg === undefined || values.Rf === 0) {
      stage.amplifier(mix, out, out)
      return
    }
    const tap = stage.node('fb')
    stage.amplifier(mix, tap, out)
    stage.resistor('Rf', out, tap, values.Rf)
    stage.resistor('Rg', tap, '0', values.Rg)
  },
  equations(values, _sizing, need) {
    const r1 = leg('R1', values.R1, need.sourceResistance, 'Rsource')
    const r2 = leg('R2', values.R2, need.reference?.resistance ?? 0, 'Rref')
    const unity = values.Rg === undefined || values.Rf === 0
    const noise = unity ? 1 : 1 + (values.Rf ?? 0) / (values.Rg ?? 1)
    const symbol = unity ? '' : ' × (1 + Rf/Rg)'
    const after = unity ? '' : ` × (1 + ${ohms(values.Rf)}/${ohms(values.Rg)})`
    const v = need.reference?.voltage ?? 0
    const sum = r1.value + r2.value
    return gainAndOffset(
      {
        symbolic: `${r2.symbolic}/(${r1.symbolic} + ${r2.symbolic})${symbol}`,
        numeric: `${r2.numeric}/(${r1.numeric} + ${r2.numeric})${after}`,
        value: (r2.value / sum) * noise,
      },
      {
        symbolic: `Vref × ${r1.symbolic}/(${r1.symbolic} + ${r2.symbolic})${symbol}`,
        numeric: `${voltsText(v)} × ${r1.numeric}/(${r1.numeric} + ${r2.numeric})${after}`,
        value: ((v * r1.value) / sum) * noise,
      },
    )
  },
}

/**
 * Rg returned to a divider of the reference, whose Thevenin resistance stands in the gain.
 * G = 1 + Rf/(Rg + R1∥R2), b = −Vref·R2/(R1+R2)·Rf/(Rg + R1∥R2); exists for G > 1, 0 < −b ≤ Vref(G − 1).
 */
export const nonInvertingDown: Arrangement = {
  id: 'non-inverting-down',
  title: 'Non-inverting amplifier, offset down',
  signal: 'single-ended',
  inverting: false,
  amplifiers: 1,
  roles: {
    R1: 'Level, upper leg',
    R2: 'Level, lower leg',
    Rf: 'Gain, feedback',
    Rg: 'Gain, to the level',
  },
  consider(need) {
    const supply = supplyReason(need)
    if (supply) return { ok: false, reason: supply }
    const reference = shiftReference(need)
    if ('reason' in reference) return { ok: false, reason: reference.reason }
    const target = oriented(need, 1)
    const gain = slope(need, target)
    const offset = intercept(need, target)
    if (gain <= 1)
      return refuse(
        'gain-below-one',
        `The gain is ${gain.toPrecision(4)}: this arrangement needs more than 1.`,
        { gain },
      )
    if (offset >= 0)
      return refuse('offset-up', `The offset is ${voltsText(offset)}: this arrangement only shifts down.`, {
        offset,
      })
    const most = reference.voltage * (gain - 1)
    if (-offset > most)
      return refuse(
        'offset-too-large',
        `The offset of ${voltsText(offset)} is more than the reference gives at this gain (${voltsText(-most)}): a weighted difference or a higher reference reaches it.`,
        { offset, most: -most },
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
        kind: 'non-inverting-down',
        signal: signalEnds(need),
        reference: need.reference.voltage,
        referenceResistance: need.reference.resistance,
      },
    }
  },
  build(stage, values) {
    const tap = stage.node('fb')
    const level = stage.node('lvl')
    stage.amplifier(stage.nodes.p, tap, stage.nodes.out)
    stage.resistor('Rf', stage.nodes.out, tap, values.Rf)
    stage.resistor('Rg', tap, level, values.Rg)
    stage.resistor('R1', 'vref', level, values.R1)
    stage.resistor('R2', level, '0', values.R2)
  },
  equations(values, _sizing, need) {
    const v = need.reference?.voltage ?? 0
    const r1 = leg('R1', values.R1, need.reference?.resistance ?? 0, 'Rref')
    const r2 = values.R2 ?? 0
    const thevenin = (r1.value * r2) / (r1.value + r2)
    const total = (values.Rg ?? 0) + thevenin
    const ratio = (values.Rf ?? 0) / total
    return gainAndOffset(
      {
        symbolic: `1 + Rf/(Rg + ${r1.symbolic} || R2)`,
        numeric: `1 + ${ohms(values.Rf)}/(${ohms(values.Rg)} + ${ohms(thevenin)})`,
        value: 1 + ratio,
      },
      {
        symbolic: `−Vref × R2/(${r1.symbolic} + R2) × Rf/(Rg + ${r1.symbolic} || R2)`,
        numeric: `−${voltsText(v)} × ${ohms(r2)}/(${r1.numeric} + ${ohms(r2)}) × ${ohms(values.Rf)}/${ohms(total)}`,
        value: ((-v * r2) / (r1.value + r2)) * ratio,
      },
    )
  },
}
