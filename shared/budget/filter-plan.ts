import type { ChainSpec } from '#shared/design/chain.ts'
import type { FilterPlan, FilterSection, RoomState } from '#shared/design/plan.ts'
import type { Design } from '#shared/design/schema.ts'
import { sectionValues } from '#shared/filters/filter-spec.ts'
import { CHEBYSHEV_RIPPLE, toDb } from '#shared/filters/prototypes.ts'
import { sectionOf } from '#shared/filters/section-values.ts'
import {
  aliasAttenuation,
  aliasFrequency,
  ordersFor,
  rateInReach,
  samplingRate,
} from '#shared/filters/wish.ts'
import { legResistance } from '#shared/sensors/kinds/common.ts'
import { toleranceBand } from './filter-band.ts'
import { digitalPart, mainsPickup } from './filter-mains.ts'
import {
  cornerNear,
  filterResponse,
  frequencyAt,
  readSection,
  type FilterResponseOf,
} from './filter-response.ts'
import { responseChain } from './response-chain.ts'

/** Steps per decade in which the stop band is looked through. */
const STEPS = 8
/** A rise of the gain by less than this is no end of the attenuation, dB. */
const RISE = 0.5

/**
 * What the filter does: its sections as wanted, as their values give them and as the network with the real amplifiers
 * shows them; corner, droop and attenuation from the response of the network; what folds into the band and what would
 * keep it out; the band over tolerances; the digital filter; mains. Everything relative to the gain at 0 Hz.
 */
export function describeFilter(design: Design, spec: ChainSpec): FilterPlan {
  const { filter } = spec
  const { kind, response, order, wantedCorner, drive } = filter
  const { bandwidth } = design.sensor
  const real = filterResponse(design, spec)
  const present = kind !== 'none'
  const corner = present ? cornerNear(real.gain, wantedCorner) : 0
  const series = seriesBefore(design, spec)
  const at = {
    droop: present ? (bandwidth ?? null) : null,
    reached: present ? aliasFrequency(design) : null,
  }
  const rate = samplingRate(design.converter)
  return {
    kind,
    response,
    order,
    normalisation: normalisationOf(filter.kind, response),
    wantedCorner,
    corner,
    sections: sectionsOf(design, spec, real),
    resistance: drive.resistance,
    capacitance: drive.capacitance,
    droopAtBandwidth: bandwidth === undefined ? null : toDb(real.gain(bandwidth)),
    alias: aliasOf(design, real, corner),
    atHalfSampleRate: rate === null ? null : toDb(real.gain(rate / 2)),
    floor: filter.sections.length > 0 ? floorOf(design, real, corner) : null,
    band: present
      ? toleranceBand(design, spec, series, { corner, gain: real.gain }, at)
      : { corner: { low: 0, high: 0 }, droop: null, reached: null },
    digital: digitalPart(design),
    mains: mainsPickup(design, spec),
  }
}

/** What the corner means, for people. */
function normalisationOf(kind: FilterPlan['kind'], response: FilterPlan['response']): string {
  if (kind === 'none') return ''
  const corner = 'The corner is where the gain is 3 dB under that at 0 Hz'
  return kind !== 'rc' && response === 'chebyshev'
    ? `${corner}, not the edge of the ripple of ${CHEBYSHEV_RIPPLE} dB.`
    : `${corner}.`
}

/** Resistance of the source where it feeds the filter itself, Ω. */
export function seriesBefore(design: Design, { stages }: ChainSpec): number {
  if (stages.some(({ arrangement }) => arrangement.amplifiers > 0)) return 0
  return design.sensor.kind === 'voltage' ? legResistance(design.sensor).value : 0
}

function sectionsOf(design: Design, spec: ChainSpec, { network }: FilterResponseOf): FilterSection[] {
  const input = responseChain(design, spec).following[0]?.node ?? ''
  const { sections, drive } = spec.filter
  const list = sections.map((section, i): FilterSection => ({
    ref: section.ref,
    wanted: section.wanted,
    values: sectionOf(sectionValues(section)),
    real: readSection(network, section, sections[i - 1]?.ref ?? input),
    parts: section.parts,
  }))
  const pole: FilterSection[] = drive.isPole
    ? [
        {
          ref: 'R9',
          wanted: { f0: drive.wantedCorner, q: null },
          values: { f0: drive.corner, q: null },
          real: null,
          parts: { R9: drive.resistance, C9: drive.capacitance },
        },
      ]
    : []
  return [...list, ...pole]
}

function aliasOf(design: Design, real: FilterResponseOf, corner: number): FilterPlan['alias'] {
  const frequency = aliasFrequency(design)
  const { bandwidth } = design.sensor
  if (frequency === null || bandwidth === undefined) return null
  const wanted = aliasAttenuation(design)
  const reached = toDb(real.gain(frequency))
  // A figure that nobody asked for is no failure.
  const short: RoomState = design.rules.aliasAttenuation === undefined ? 'tight' : 'over'
  const found =
    corner > 0 ? frequencyAt(real.gain, 10 ** (-wanted / 20), Math.max(bandwidth, corner / 4)) : null
  return {
    frequency,
    wanted,
    reached,
    state: reached >= wanted - 1e-9 ? 'clear' : short,
    orders: ordersFor(design),
    rateFor: found === null ? null : rateInReach(design, found + bandwidth),
  }
}

/**
 * The least attenuation that is left where that of real amplifiers gives way again above the corner; null where it
 * grows all the way.
 */
function floorOf(design: Design, real: FilterResponseOf, corner: number): FilterPlan['floor'] {
  const top = 100 * design.parts.amplifier.gbw
  const count = Math.max(2, Math.ceil(STEPS * Math.log10(top / corner)))
  const frequencies = Array.from({ length: count }, (_, i) => corner * (top / corner) ** (i / (count - 1)))
  const gains = real.gains(frequencies)
  let deepest = Infinity
  let back: { gain: number; frequency: number } | null = null
  gains.forEach((gain, i) => {
    deepest = Math.min(deepest, gain)
    if (toDb(deepest) - toDb(gain) > RISE && gain > (back?.gain ?? 0))
      back = { gain, frequency: frequencies[i] ?? corner }
  })
  const found = back as { gain: number; frequency: number } | null
  return found && { attenuation: toDb(found.gain), frequency: found.frequency }
}
