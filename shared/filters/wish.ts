import type { FilterKind, FilterResponse } from '#shared/design/plan.ts'
import type { Design } from '#shared/design/schema.ts'
import { cornerFor, MOST_POLES, prototypeSections, responses, sectionsGain, toDb } from './prototypes.ts'
import { fixedDrive, sizeRc } from './rc.ts'

/** What a filter is to be, before any part of it is picked. */
export interface FilterWish {
  kind: FilterKind
  response: FilterResponse
  order: number
  /** −3 dB corner, Hz. */
  corner: number
}

/** Loss of amplitude (fraction) at the signal bandwidth for which a filter of several poles is given its corner: 0.5 % less what
 * standard values may add. */
export const LOSS_AT_BANDWIDTH = 0.003
/** A single pole: 0.5 % at a tenth of its corner. */
const RC_RATIO = 10
/** Attenuation to spare where the plan chooses the order, so that standard values do not undo it, dB. */
const SPARE = 1
/** Where nothing says where the corner should be, Hz. */
const FALLBACK_CORNER = 10_000

/** Lowest frequency that folds into the band, Hz; null without a signal bandwidth or a rate. */
export function aliasFrequency({ converter, sensor }: Design): number | null {
  const rate = samplingRate(converter)
  if (rate === null || sensor.bandwidth === undefined || sensor.bandwidth >= rate / 2) return null
  return rate - sensor.bandwidth
}

/** Rate at which the input itself is sampled, Hz: that of the modulator in an oversampling converter. */
export function samplingRate(converter: Design['converter']): number | null {
  const { architecture, modulatorRate, sampleRate } = converter
  return (architecture === 'oversampling' ? modulatorRate : undefined) ?? sampleRate ?? null
}

/** A rate beyond this many times the present one is another converter, not a cure. */
const MOST_FASTER = 100
/** Rates are compared with this much of a rounding, fraction. */
const ROUNDING = 1e-9

/** A sample rate (Hz) that this converter could be run at: null beyond what its acquisition or its present rate allow. */
export function rateInReach({ converter }: Design, rate: number): number | null {
  const present = samplingRate(converter)
  const fastest = Math.min(
    converter.acquisitionTime === undefined ? Infinity : 1 / converter.acquisitionTime,
    present === null ? Infinity : MOST_FASTER * present,
  )
  return rate <= fastest * (1 + ROUNDING) ? rate : null
}

/** Whether samples follow each other faster than the converter acquires one. */
export function outrunsAcquisition({ converter }: Design): boolean {
  const rate = samplingRate(converter)
  return rate !== null && rate * (converter.acquisitionTime ?? 0) > 1 + ROUNDING
}

/** Attenuation wanted there, dB: as stated, else a full-scale interferer down to one code, 20·log10(2^N). */
export const aliasAttenuation = ({ rules, converter }: Design): number =>
  rules.aliasAttenuation ?? 20 * Math.log10(2 ** converter.bits)

/** Corner that a filter of several poles takes where none is asked for, Hz. */
export function defaultCorner(design: Design, response: FilterResponse, order: number): number {
  const { sensor, converter } = design
  if (sensor.bandwidth !== undefined) return cornerFor(response, order, sensor.bandwidth, LOSS_AT_BANDWIDTH)
  return converter.sampleRate === undefined ? FALLBACK_CORNER : converter.sampleRate / 2
}

/**
 * Fewest poles of a response with which `wanted` dB are reached at the alias frequency, at a stated corner or else at
 * the one that the signal bandwidth allows; null where six do not.
 */
export function orderFor(
  design: Design,
  response: FilterResponse,
  wanted: number,
  corner: number | undefined,
): number | null {
  const alias = aliasFrequency(design)
  if (alias === null) return null
  for (let order = 1; order <= MOST_POLES; order++) {
    const at = corner ?? defaultCorner(design, response, order)
    if (toDb(sectionsGain(prototypeSections(response, order), alias / at)) >= wanted) return order
  }
  return null
}

/** The same for each response. */
export function ordersFor(design: Design): Record<FilterResponse, number | null> {
  const corner = design.choose.filter?.corner
  const wanted = aliasAttenuation(design)
  const entries = responses.map((response) => [response, orderFor(design, response, wanted, corner)] as const)
  return Object.fromEntries(entries) as Record<FilterResponse, number | null>
}

/**
 * Sample rate (Hz) at which six poles of a response reach the attenuation wanted, with the corner that they would have;
 * null without a signal bandwidth or where the converter cannot be run that fast.
 */
export function rateForSixPoles(design: Design, response: FilterResponse): number | null {
  const { bandwidth } = design.sensor
  if (bandwidth === undefined) return null
  const corner = design.choose.filter?.corner ?? defaultCorner(design, response, MOST_POLES)
  const sections = prototypeSections(response, MOST_POLES)
  const wanted = aliasAttenuation(design)
  let [low, high] = [1, 1e6]
  for (let i = 0; i < 60; i++) {
    const middle = Math.sqrt(low * high)
    if (toDb(sectionsGain(sections, middle)) >= wanted) high = middle
    else low = middle
  }
  return rateInReach(design, corner * high + bandwidth)
}

/**
 * What a person chose, completed; without a choice one pole at the converter's pin, or, where an attenuation is stated
 * that this does not reach, the fewest poles of a Butterworth response in sallen-key sections that do.
 */
export function filterWish(design: Design): FilterWish {
  const { choose, rules } = design
  const chosen = choose.filter
  if (chosen?.kind === 'none') return none
  if (chosen === undefined)
    return rules.aliasAttenuation === undefined ? rcWish(design) : byAttenuation(design)
  if (chosen.kind === 'rc') return rcWish(design)
  const response = chosen.response ?? 'butterworth'
  const order = chosen.order ?? leastOrder(design, response, chosen.corner)
  const corner = chosen.corner ?? defaultCorner(design, response, order)
  // One pole needs no amplifier, whatever the kind.
  return { kind: order === 1 ? 'rc' : chosen.kind, response, order, corner }
}

const none: FilterWish = { kind: 'none', response: 'butterworth', order: 0, corner: 0 }

/** Two poles at least, since fewer would be no filter of this kind; more where a stated attenuation asks for them. */
function leastOrder(design: Design, response: FilterResponse, corner: number | undefined): number {
  const { aliasAttenuation: stated } = design.rules
  if (stated === undefined || aliasFrequency(design) === null) return 2
  return Math.max(2, orderFor(design, response, stated + SPARE, corner) ?? MOST_POLES)
}

/** Corner of one pole: as chosen, as fixed parts give it, ten times the signal bandwidth, or half the sample rate. */
function rcWish(design: Design): FilterWish {
  const { choose, sensor, converter } = design
  const { R, C } = fixedDrive(design)
  const asked =
    choose.filter !== undefined ||
    [choose.values?.R9, choose.values?.C9, choose.drive?.resistance, choose.drive?.capacitance].some(
      (value) => value !== undefined,
    )
  const corner =
    choose.filter?.corner ??
    (R && C
      ? 1 / (2 * Math.PI * R * C)
      : sensor.bandwidth !== undefined
        ? RC_RATIO * sensor.bandwidth
        : converter.sampleRate !== undefined
          ? converter.sampleRate / 2
          : asked
            ? FALLBACK_CORNER
            : 0)
  return corner === 0 ? none : { kind: 'rc', response: 'butterworth', order: 1, corner }
}

function byAttenuation(design: Design): FilterWish {
  const rc = rcWish(design)
  const alias = aliasFrequency(design)
  const stated = design.rules.aliasAttenuation ?? 0
  if (alias === null || rc.kind === 'none') return rc
  const { R, C } = sizeRc(design, rc.corner)
  if (20 * Math.log10(Math.hypot(1, alias * 2 * Math.PI * R * C)) >= stated) return rc
  const response = 'butterworth'
  const order = Math.max(2, orderFor(design, response, stated + SPARE, undefined) ?? MOST_POLES)
  return { kind: 'sallen-key', response, order, corner: defaultCorner(design, response, order) }
}
