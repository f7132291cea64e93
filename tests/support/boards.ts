import { solveDc, type DcSolution, type Injection } from '#shared/analysis/dc.ts'
import type { Chain } from '#shared/design/chain.ts'
import type { Design } from '#shared/design/schema.ts'
import type { Amplifier, Network } from '#shared/network/types.ts'

/*
 * One board after the other, drawn from the design's own figures: every part within its limits, as a workshop would
 * build them. Shares the solver with the engine, but not its idea of what is uncertain nor of which bound that gives.
 */

/** Gives a number from −1 to 1 for a named part. */
export type Draw = (name: string) => number

export interface Board {
  solution: DcSolution
  /** Voltage of the converter's reference on this board over its nominal. */
  referenceRatio: number
}

interface Making {
  design: Design
  network: Network
  /** Share of the span at which the measurand stands: 0 at quantity.low, 1 at quantity.high. */
  share: number
  draw: Draw
  set: Record<string, number>
  extra: Injection[]
}

/** The board of a chain on which each part stands at `draw` of its limit, with the measurand at `quantity`. */
export function buildBoard(design: Design, chain: Chain, quantity: number, draw: Draw): Board {
  const { network } = chain
  const { low, high } = design.sensor.quantity
  const share = (quantity - low) / (high - low)
  const making: Making = { design, network, share, draw, set: {}, extra: [] }
  const kelvin = furthest(design.temperature)
  for (const e of network.elements)
    if (e.kind === 'resistor' && e.tolerance + e.drift > 0)
      making.set[e.ref] = e.value * (1 + draw(e.ref) * (e.tolerance + e.drift * kelvin))
  const supplyChange = drawRail(making, 'VPOS', 'positive') - drawRail(making, 'VNEG', 'negative')
  const referenceRatio = drawReferences(making)
  drawSensor(making)
  for (const e of network.elements) if (e.kind === 'amplifier') drawErrors(making, e, supplyChange)
  const { inputCurrent } = design.converter
  if (inputCurrent > 0) making.set.IADC = draw('IADC') * inputCurrent
  const { set, extra } = making
  return { solution: solveDc(network, { model: 'real', set, extra }), referenceRatio }
}

/** Kelvins from 25 °C at the end of the range that lies further off. */
const furthest = (range: { low: number; high: number }): number =>
  Math.max(Math.abs(range.low - 25), Math.abs(range.high - 25))

function drawRail({ design, draw, set }: Making, ref: string, which: 'positive' | 'negative'): number {
  const { tolerance, ripple } = design.rails
  const change = draw(ref) * (Math.abs(design.rails[which]) * tolerance + ripple)
  set[ref] = design.rails[which] + change
  return change
}

/** References and excitation, those that are one source moving as one. Returns that of the converter over nominal. */
function drawReferences({ design, network, draw, set }: Making): number {
  const { converter, shiftReference, rails, sensor } = design
  const kelvin = furthest(design.temperature)
  const rail = (set.VPOS ?? rails.positive) / rails.positive
  const own = (given: { tolerance: number; drift: number }, name: string): number =>
    1 + draw(name) * (given.tolerance + given.drift * kelvin)
  const { reference } = converter
  const ofConverter = !reference ? 1 : reference.same === 'positive' ? rail : own(reference, 'reference')
  const ofShift =
    !shiftReference || shiftReference.same === 'converter'
      ? ofConverter
      : shiftReference.same === 'positive'
        ? rail
        : own(shiftReference, 'shift')
  for (const e of network.elements) {
    if (e.kind !== 'voltage-source') continue
    if (e.ref === 'VREF') set.VREF = e.value * ofShift
    if (e.ref !== 'VEXC' || sensor.kind !== 'bridge') continue
    const given = typeof sensor.excitation === 'object' ? sensor.excitation : null
    const alone = given
      ? given.tolerance + given.drift * furthest(sensor.temperature ?? design.temperature)
      : 0
    const shared = { converter: ofConverter, shift: ofShift, positive: rail }
    set.VEXC = given?.same
      ? e.value * (shared[given.same] + draw('excitation') * given.ratioTolerance)
      : e.value * (1 + draw('excitation') * alone)
  }
  return ofConverter
}

/** Errors of the sensor itself, and where its common mode stands. */
function drawSensor({ design, share, draw, extra }: Making): void {
  const { sensor } = design
  if (sensor.kind !== 'voltage') return
  const kelvin = furthest(sensor.temperature ?? design.temperature)
  const { zero, zeroDrift, span, spanDrift, linearity, repeatability } = sensor.accuracy
  const size = Math.abs(sensor.output.high - sensor.output.low)
  const limits = {
    zero: zero + zeroDrift * kelvin,
    span: (span + spanDrift * kelvin) * Math.abs(share),
    linearity,
    repeatability,
  }
  for (const [name, limit] of Object.entries(limits))
    extra.push({ ref: 'VSENSE', port: 'value', amount: draw(name) * limit * size })
  if (!sensor.commonMode) return
  const half = (sensor.commonMode.high - sensor.commonMode.low) / 2
  extra.push({ ref: 'VCM', port: 'value', amount: draw('commonMode') * half })
}

/** A rejection in dB as a ratio. */
const rejection = (decibels: number): number => 10 ** (-decibels / 20)

function drawErrors(making: Making, e: Amplifier, supplyChange: number): void {
  if (e.macro) return drawIntegratedErrors(making, e, supplyChange)
  const { design, draw, extra } = making
  const { part, ref } = e
  const { low, high } = design.temperature
  const kelvin = furthest({ low, high })
  const growth = part.ibDoubling > 0 ? Math.max(1, 2 ** ((high - 25) / part.ibDoubling)) : 1
  const middle = (design.rails.positive + design.rails.negative) / 2
  // From nothing when cold to the hot limit; the network holds the figure at 25 °C already.
  const bias = ((draw(`${ref}.ib`) + 1) / 2) * part.ib * growth - part.ib
  const unequal = (draw(`${ref}.ios`) * part.ios * growth) / 2
  const cmrr = draw(`${ref}.cmrr`) * rejection(part.cmrr)
  extra.push(
    { ref, port: 'vos', amount: draw(`${ref}.vos`) * (part.vos + part.vosDrift * kelvin) },
    { ref, port: 'vos', amount: draw(`${ref}.psrr`) * rejection(part.psrr) * supplyChange },
    { ref, port: 'cmrr', amount: cmrr, reference: part.vosCommonMode ?? middle },
    { ref, port: 'ib+', amount: bias + unequal },
    { ref, port: 'ib-', amount: bias - unequal },
  )
}

/** Both halves of an integrated part come here; its offset and rejection are told at its + input alone. */
function drawIntegratedErrors(making: Making, e: Amplifier, supplyChange: number): void {
  const { design, draw, extra, network } = making
  const part = design.parts.instrumentation
  const macro = e.macro ?? ''
  const positive = e.ref.endsWith('B')
  const bias = ((draw(`${macro}.ib`) + 1) / 2) * part.ib - part.ib
  const unequal = (draw(`${macro}.ios`) * part.ios) / 2
  extra.push({ ref: e.ref, port: 'ib+', amount: bias + (positive ? unequal : -unequal) })
  if (!positive) return
  const kelvin = furthest(design.temperature)
  const gain = integratedGain(network, e, part.k)
  const limit = part.vosIn + part.vosInDrift * kelvin + (part.vosOut + part.vosOutDrift * kelvin) / gain
  const { positive: top, negative: bottom } = design.rails
  extra.push(
    { ref: e.ref, port: 'vos', amount: draw(`${macro}.vos`) * limit },
    {
      ref: e.ref,
      port: 'vos',
      amount: draw(`${macro}.psrr`) * rejection(along(part.psrr, gain)) * supplyChange,
    },
    {
      ref: e.ref,
      port: 'cmrr',
      amount: draw(`${macro}.cmrr`) * rejection(along(part.cmrr, gain)),
      reference: (top + bottom) / 2,
    },
  )
}

/** 1 + k/Rg, Rg being the resistor between the two halves. */
function integratedGain(network: Network, e: Amplifier, k: number): number {
  const mate = network.elements.find((o) => o.kind === 'amplifier' && o.macro === e.macro && o.ref !== e.ref)
  const between = mate?.kind === 'amplifier' ? [e.m, mate.m] : []
  const found = network.elements.find(
    (o) => o.kind === 'resistor' && between.includes(o.a) && between.includes(o.b),
  )
  return found?.kind === 'resistor' ? 1 + k / found.value : 1
}

/** Figure of a two-row table at a gain, straight in dB over the logarithm of the gain. */
function along(table: readonly (readonly [number, number])[], gain: number): number {
  const [[g0, f0], [g1, f1]] = [table[0] ?? [1, 0], table[table.length - 1] ?? [1, 0]]
  const share = Math.min(Math.max(Math.log(gain / g0) / Math.log(g1 / g0), 0), 1)
  return f0 + (f1 - f0) * share
}
