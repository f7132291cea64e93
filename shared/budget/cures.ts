import { feedbackRef } from '#shared/amplifiers/stage-builder.ts'
import type { Cure } from '#shared/design/plan.ts'
import type { Design } from '#shared/design/schema.ts'
import type { Amplifier, Network, NetworkElement } from '#shared/network/types.ts'
import { standardValues } from '#shared/parts/series.ts'
import { formatQuantity } from '#shared/units/format-quantity.ts'

/** Phase margin that a cure aims at, and the least that counts as one, degrees. */
const AIM = 60
const LEAST = 45
/** Ratio of the steps of the first, coarse pass over the values. */
const COARSE = 2

/** A resistance behind which a load is no load, Ω. */
const CUT_OFF = 1e9

/** Worst phase margin of the amplifier in a changed network, degrees; null where its loop has no crossover. */
type Judge = (network: Network) => number | null

/**
 * What would steady an amplifier: a larger resistor between it and its reservoir, or a capacitor from its output to its
 * − input. Each is the smallest standard value with which the worst margin reaches 60°, or the best reached, found and
 * verified in the network itself.
 */
export function curesFor(
  design: Design,
  network: Network,
  amplifier: Amplifier,
  worst: number,
  judge: Judge,
): Cure[] {
  const helps = (cure: Cure | null): cure is Cure =>
    cure !== null && cure.phaseMargin >= LEAST && cure.phaseMargin > worst + 1
  const alone = [
    seriesResistor(design, network, amplifier, judge),
    feedbackCapacitor(design, network, amplifier, judge),
  ].filter(helps)
  return alone.length > 0 ? alone : [bothTogether(design, network, amplifier, judge)].filter(helps)
}

/** Where the load and the amplifier's own inputs ail it together: the capacitor for one, the resistor for the other. */
function bothTogether(design: Design, network: Network, amplifier: Amplifier, judge: Judge): Cure | null {
  const present = network.elements.find((e) => e.ref === 'R9')
  if (present?.kind !== 'resistor') return null
  const unloaded = withElement(network, { ...present, value: CUT_OFF })
  const capacitor = feedbackCapacitor(design, unloaded, amplifier, judge)
  if (!capacitor || capacitor.phaseMargin < LEAST) return null
  const steadied = withElement(network, capacitorElement(design, amplifier, capacitor.value))
  const resistor = seriesResistor(design, steadied, amplifier, judge)
  if (!resistor) return null
  return {
    ...resistor,
    values: { ...capacitor.values, ...resistor.values },
    text: `With ${formatQuantity(capacitor.value, 'F')} from the output of ${amplifier.ref} to its − input (${capacitor.ref}), ${resistor.text}`,
  }
}

function seriesResistor(
  design: Design,
  network: Network,
  { ref, out }: Amplifier,
  judge: Judge,
): Cure | null {
  const present = network.elements.find((e) => e.ref === 'R9')
  const reservoir = network.elements.find((e) => e.ref === 'C9')
  if (present?.kind !== 'resistor' || reservoir?.kind !== 'capacitor' || present.a !== out) return null
  const judgeWith = (value: number) => judge(withElement(network, { ...present, value }))
  // Where the margin stays low with the load as good as cut off, the load is not what ails the amplifier.
  if ((judgeWith(CUT_OFF) ?? -Infinity) < LEAST) return null
  const { stock, series, maximum } = design.parts.resistors
  const list = stock.length > 0 ? [...stock].sort((a, b) => a - b) : standardValues(series, 1, maximum)
  const found = smallest(
    list.filter((value) => value > present.value),
    judgeWith,
  )
  if (!found) return null
  const corner = 1 / (2 * Math.PI * found.value * reservoir.value)
  return {
    kind: 'series-resistor',
    ref: 'R9',
    ...found,
    values: { R9: found.value, C9: reservoir.value },
    text: `${formatQuantity(found.value, 'Ω')} for R9 in place of ${formatQuantity(present.value, 'Ω')} gives ${ref} a phase margin of ${degrees(found.phaseMargin)} at worst; with C9 as it is the corner of the pair moves to ${formatQuantity(corner, 'Hz', { digits: 3 })}.`,
  }
}

function feedbackCapacitor(
  design: Design,
  network: Network,
  amplifier: Amplifier,
  judge: Judge,
): Cure | null {
  const { ref, out, m } = amplifier
  if (m === out) return null
  const { stock, series, minimum, maximum } = design.parts.capacitors
  const list = stock.length > 0 ? [...stock].sort((a, b) => a - b) : standardValues(series, minimum, maximum)
  const name = feedbackRef(ref)
  const found = smallest(list, (value) =>
    judge(withElement(network, capacitorElement(design, amplifier, value))),
  )
  if (!found) return null
  return {
    kind: 'feedback-capacitor',
    ref: name,
    ...found,
    values: { [name]: found.value },
    text: `${formatQuantity(found.value, 'F')} from the output of ${ref} to its − input (${name}) gives it a phase margin of ${degrees(found.phaseMargin)} at worst.`,
  }
}

function capacitorElement(design: Design, { ref, out, m, stage }: Amplifier, value: number): NetworkElement {
  const { tolerance, drift } = design.parts.capacitors
  return {
    kind: 'capacitor',
    ref: feedbackRef(ref),
    a: out,
    b: m,
    value,
    tolerance,
    drift,
    fixed: false,
    stage,
  }
}

const degrees = (margin: number): string => `${Math.floor(margin)}°`

/** The network with an element in place of the one of its designator, or added. */
function withElement(network: Network, element: NetworkElement): Network {
  const present = network.elements.some((e) => e.ref === element.ref)
  return {
    ...network,
    elements: present
      ? network.elements.map((e) => (e.ref === element.ref ? element : e))
      : [...network.elements, element],
  }
}

interface Found {
  value: number
  phaseMargin: number
}

/**
 * Smallest value of an ascending list at which the margin reaches the aim: coarse steps up to the first that does, then
 * halving between it and the one before. Where none does, the best of those tried.
 */
function smallest(list: readonly number[], judge: (value: number) => number | null): Found | null {
  let best: Found | null = null
  const reaches = (at: number): Found | null => {
    const value = list[at] ?? Number.NaN
    const found = { value, phaseMargin: judge(value) ?? -Infinity }
    if (found.phaseMargin >= AIM) return found
    if (!best || found.phaseMargin > best.phaseMargin) best = found
    return null
  }
  let failed = -1
  for (let at = 0; at < list.length; at = nextStep(list, at)) {
    let found = reaches(at)
    if (!found) {
      failed = at
      continue
    }
    for (let high = at; high - failed > 1;) {
      const middle = (failed + high) >> 1
      const closer = reaches(middle)
      if (closer) {
        found = closer
        high = middle
      } else failed = middle
    }
    return found
  }
  return best
}

function nextStep(list: readonly number[], at: number): number {
  const least = (list[at] ?? Infinity) * COARSE
  const found = list.findIndex((value, i) => i > at && value >= least)
  return found < 0 ? list.length : found
}
