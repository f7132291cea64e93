import { formatQuantity } from '#shared/units/format-quantity.ts'
import type { Dynamics, FilterPlan, Finding } from './plan.ts'
import type { Design } from './schema.ts'

/** Whether the signal's own band gets through: sampled often enough, and not filtered away. */

/** Loss of amplitude at the signal bandwidth that is told, and the one that is too much (3 dB). */
const TOLD = 0.1
const LOST = 1 - Math.SQRT1_2

const hertz = (f: number, rounding: 'up' | 'down') => formatQuantity(f, 'Hz', { digits: 3, rounding })

export function rateFindings(design: Design, dynamics: Dynamics, filter: FilterPlan): Finding[] {
  return [
    ...sampling(design),
    ...lostBand(design, dynamics),
    ...unusedDigital(design),
    ...ceramic(design, filter),
  ]
}

/** Rate at which results come, Hz. */
function resultRate({ converter }: Design): { rate: number; path: string } | null {
  const { architecture, digitalFilter, outputRate, sampleRate } = converter
  if (architecture === 'oversampling' && digitalFilter !== 'none' && outputRate !== undefined)
    return { rate: outputRate, path: 'converter.outputRate' }
  return sampleRate === undefined ? null : { rate: sampleRate, path: 'converter.sampleRate' }
}

function sampling(design: Design): Finding[] {
  const { bandwidth } = design.sensor
  const found = resultRate(design)
  if (bandwidth === undefined || found === null || found.rate > 2 * bandwidth) return []
  return [
    {
      code: 'undersampled',
      severity: 'over',
      place: 'adc',
      path: found.path,
      text: `${hertz(found.rate, 'down')} is too slow for a signal of up to ${hertz(bandwidth, 'up')}: more than ${hertz(2 * bandwidth, 'up')} is needed, and no filter can part the signal from its own images.`,
      numbers: { rate: found.rate, bandwidth },
    },
  ]
}

function lostBand({ sensor, converter }: Design, { droopAtBandwidth }: Dynamics): Finding[] {
  if (droopAtBandwidth === null || droopAtBandwidth < TOLD) return []
  const percent = formatQuantity(droopAtBandwidth, '', { digits: 2, display: 'percent', rounding: 'up' })
  const digital = converter.architecture === 'oversampling' && converter.digitalFilter !== 'none'
  return [
    {
      code: 'band-lost',
      severity: droopAtBandwidth > LOST ? 'over' : 'tight',
      place: 'adc',
      path: digital ? 'converter.outputRate' : 'choose.filter.corner',
      text: `At the signal's bandwidth of ${hertz(sensor.bandwidth ?? 0, 'down')} ${percent} of its amplitude is lost${digital ? ', the digital filter included' : ''}. Raise the ${digital ? 'output data rate' : 'corner'}, or state the bandwidth that is meant.`,
      numbers: { droop: droopAtBandwidth },
    },
  ]
}

function unusedDigital({ converter }: Design): Finding[] {
  if (converter.architecture === 'oversampling' || converter.digitalFilter === 'none') return []
  return [
    {
      code: 'unused-choice',
      severity: 'info',
      place: 'adc',
      path: 'converter.digitalFilter',
      text: 'The converter takes single samples: the digital filter stated for it has no effect. Set its architecture to oversampling if it has one.',
      numbers: {},
    },
  ]
}

function ceramic({ parts }: Design, { kind }: FilterPlan): Finding[] {
  if (parts.capacitors.dielectric !== 'X7R' || kind !== 'rc') return []
  return [
    {
      code: 'class-2-capacitor',
      severity: 'caution',
      place: 'C9',
      path: 'parts.capacitors.dielectric',
      text: 'C9 is a class 2 ceramic: its value falls with voltage, temperature and age, which the tolerance of the corner here does not hold. Take C0G or film in a filter.',
      numbers: {},
    },
  ]
}
