import type { ChainSpec } from '#shared/design/chain.ts'
import type { Ends } from '#shared/design/plan.ts'
import { temperatureSpan } from '#shared/design/references.ts'
import type { Design } from '#shared/design/schema.ts'
import { sectionValues, type FilterSpec } from '#shared/filters/filter-spec.ts'
import { sectionGain, sectionsGain, toDb, type PoleSection } from '#shared/filters/prototypes.ts'
import { sectionOf, type SectionValues } from '#shared/filters/section-values.ts'
import { cornerNear } from './filter-response.ts'

/*
 * What the tolerances of the parts do to the response, ideal amplifiers. Sections do not load one another, so that at
 * one frequency each takes its own worst vertex and the attenuations add up.
 */

/** The same section on boards at the vertices of its tolerances. */
type Vertices = readonly PoleSection[]

export interface FilterBand {
  /** The nominal board. */
  nominal: readonly PoleSection[]
  /** Lowest and highest gain at a frequency over all boards. */
  gain(frequency: number): Ends
}

/** Series resistance (Ω) counts to R9 where no amplifier stands before it. */
export function filterBand(design: Design, filter: FilterSpec, series: number): FilterBand {
  const { resistors, capacitors } = design.parts
  const span = temperatureSpan(design)
  const years = design.calibration.interval
  const most = {
    R: Math.min(resistors.tolerance + resistors.drift * span + resistors.ageing * years, 0.99),
    C: Math.min(capacitors.tolerance + capacitors.drift * span, 0.99),
  }
  const { resistance, capacitance } = filter.drive
  const pole = (r: number, c: number): PoleSection => ({
    f0: 1 / (2 * Math.PI * (resistance * r + series) * capacitance * c),
    q: null,
  })
  const sections = filter.sections.map((section) => sectionValues(section))
  const drive = capacitance > 0
  const vertices: Vertices[] = [
    ...sections.map((values) => verticesOf(values, most)),
    ...(drive
      ? [[1 - most.R, 1 + most.R].flatMap((r) => [1 - most.C, 1 + most.C].map((c) => pole(r, c)))]
      : []),
  ]
  return {
    nominal: [...sections.map(sectionOf), ...(drive ? [pole(1, 1)] : [])],
    gain: (frequency) =>
      vertices.reduce(
        (range, list) => {
          const gains = list.map(({ f0, q }) => sectionGain(f0, q, frequency))
          return { low: range.low * Math.min(...gains), high: range.high * Math.max(...gains) }
        },
        { low: 1, high: 1 },
      ),
  }
}

function verticesOf(values: SectionValues, most: { R: number; C: number }): PoleSection[] {
  const names = Object.keys(values) as (keyof SectionValues)[]
  return Array.from({ length: 2 ** names.length }, (_, vertex) => {
    const moved = { ...values }
    names.forEach((name, bit) => {
      const limit = name.startsWith('R') ? most.R : most.C
      moved[name] = (values[name] ?? 0) * (1 + ((vertex >> bit) & 1 ? limit : -limit))
    })
    return sectionOf(moved)
  })
}

/**
 * Corner (Hz), droop and attenuation (dB) over the tolerance of the parts. `real` is what the network gives nominally:
 * the band is laid around it. Attenuation is looked at at the frequencies given; null where there is none.
 */
export function toleranceBand(
  design: Design,
  spec: ChainSpec,
  series: number,
  real: { corner: number; gain(frequency: number): number },
  at: { droop: number | null; reached: number | null },
): { corner: Ends; droop: Ends | null; reached: Ends | null } {
  const band = filterBand(design, spec.filter, series)
  const around = (frequency: number | null): Ends | null => {
    if (frequency === null) return null
    const { low, high } = band.gain(frequency)
    const shift = toDb(real.gain(frequency)) - toDb(sectionsGain(band.nominal, frequency))
    return { low: toDb(high) + shift, high: toDb(low) + shift }
  }
  const fallsAt = (gain: (frequency: number) => number) => cornerNear(gain, spec.filter.wantedCorner)
  const ideal = fallsAt((f) => sectionsGain(band.nominal, f))
  const scale = ideal > 0 ? real.corner / ideal : 0
  const corner = {
    low: fallsAt((f) => band.gain(f).low) * scale,
    high: fallsAt((f) => band.gain(f).high) * scale,
  }
  return { corner, droop: around(at.droop), reached: around(at.reached) }
}
