import type { NoiseSummary } from '#shared/design/plan.ts'
import type { Design } from '#shared/design/schema.ts'
import type { ErrorField } from './error-field.ts'
import { NOISE_DEVIATIONS, readingNoise } from './error-inputs.ts'
import { describe, lineWeights, placesOf, type Term } from './error-terms.ts'
import { lsbOf } from './source-inputs.ts'

/** Readings that are averaged at an adjustment point (common practice). */
export const AVERAGED_READINGS = 64

/**
 * What an adjustment brings in at each of its points: the standard, the noise of the averaged readings, and one code, since
 * an average of still readings is no finer. The second point counts only where zero and span are adjusted.
 */
export function adjustmentTerms(design: Design, field: ErrorField, noise: NoiseSummary): Term[] {
  const places = placesOf(field)
  const { unit } = design.sensor.quantity
  const none = new Float64Array(places.length)
  return field.adjusted.flatMap((point, k) => {
    const where = `at ${Number(point.quantity.toPrecision(6))} ${unit}`.trim()
    const weights = Float64Array.from(places, (place) => lineWeights(field, place.quantity)[k] ?? 0)
    const term = (given: Parameters<typeof describe>[0], volts: number): Term => {
      const scaled = (list: Float64Array) => list.map((weight) => weight * volts)
      return {
        ...describe(given),
        mostFactor: 1,
        calibrates: 'none',
        residuals: {
          asBuilt: none,
          zeroed: k === 0 ? scaled(none.map(() => 1)) : none,
          calibrated: scaled(weights),
        },
        slopes: none,
        places,
      }
    }
    const head = { source: 'calibration', group: null, distribution: design.analysis.distribution }
    return [
      term(
        {
          ...head,
          id: `calibration.standard.${k + 1}`,
          label: `Standard ${where}`,
          path: 'calibration.standardUncertainty',
          limit: design.calibration.standardUncertainty,
          unit: '',
        },
        Math.abs(field.span),
      ),
      term(
        {
          ...head,
          id: `calibration.noise.${k + 1}`,
          label: `Noise of ${AVERAGED_READINGS} readings ${where}`,
          path: null,
          limit: (NOISE_DEVIATIONS * readingNoise(noise)) / Math.sqrt(AVERAGED_READINGS),
          unit: 'V',
          distribution: 'normal',
          deviations: NOISE_DEVIATIONS,
        },
        1,
      ),
      term(
        {
          ...head,
          id: `calibration.code.${k + 1}`,
          label: `One code ${where}`,
          path: 'converter.bits',
          limit: 0.5,
          unit: 'LSB',
          distribution: 'rectangular',
        },
        lsbOf(design),
      ),
    ]
  })
}
