import { solveDc } from '#shared/analysis/dc.ts'
import type { Chain } from '#shared/design/chain.ts'
import type { NoiseSummary } from '#shared/design/plan.ts'
import type { Design } from '#shared/design/schema.ts'
import { amplifierInputs } from './amplifier-inputs.ts'
import type { ErrorInput } from './error-input.ts'
import { resistorInputs } from './resistor-inputs.ts'
import { commonModeInputs, converterInputs, railInputs, referenceInputs } from './source-inputs.ts'

/** Noise is printed as a limit of this many standard deviations: 6.6 from peak to peak is exceeded 0.1 % of the time. */
export const NOISE_DEVIATIONS = 3.3

/**
 * Every uncertain input of a chain, each ONE named variable, at the measurand that the chain was built for. The list is
 * the same, in the same order, at every measurand; only how much of an input enters may change. Inputs whose limit is
 * zero are absent. Without a noise summary there is no noise line.
 *
 * `voltage` gives the operating point, V; absent: it is solved for.
 */
export function errorInputs(
  design: Design,
  chain: Chain,
  noise: NoiseSummary | null,
  voltage?: (node: string) => number,
): ErrorInput[] {
  const at = voltage ?? operatingPoint(chain)
  return [
    ...chain.sensorInputs,
    ...resistorInputs(design, chain, at),
    ...amplifierInputs(design, chain),
    ...referenceInputs(design, chain),
    ...railInputs(design, chain),
    ...commonModeInputs(chain),
    ...converterInputs(design),
    ...noiseInputs(noise),
  ].filter((input) => input.limit > 0)
}

function operatingPoint(chain: Chain): (node: string) => number {
  const solution = solveDc(chain.network, { model: 'real' })
  return (node) => solution.voltage(node)
}

/** What the noise of a reading adds, V rms of y: quantisation has a line of its own. */
export function readingNoise(noise: NoiseSummary): number {
  const quantisation = noise.lines.find(({ id }) => id === 'quantisation')?.rms ?? 0
  return Math.sqrt(Math.max(0, noise.rms ** 2 - quantisation ** 2))
}

function noiseInputs(noise: NoiseSummary | null): ErrorInput[] {
  if (!noise) return []
  return [
    {
      id: 'noise',
      label: 'Noise of one reading',
      source: 'noise',
      path: null,
      limit: NOISE_DEVIATIONS * readingNoise(noise),
      unit: 'V',
      distribution: 'normal',
      deviations: NOISE_DEVIATIONS,
      behaviour: 'resolution',
      group: null,
      effects: [],
      onOutput: () => 1,
    },
  ]
}
