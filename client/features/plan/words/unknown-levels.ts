import type { Level } from '#shared/design/plan.ts'

const unknown = (node: string, title: string): Level => {
  const none = { low: Number.NaN, high: Number.NaN }
  const never = { low: null, high: null }
  return {
    node,
    title,
    unit: 'V',
    nominal: none,
    worst: none,
    region: none,
    limitedBy: '',
    room: none,
    nominalRoom: none,
    roomAt: { low: '', high: '' },
    state: 'unknown',
    clipsAt: never,
    worstClipsAt: never,
    gain: null,
  }
}

/** Both ends of every chain, before anything is known of them: the diagram draws them dashed. */
export const unknownLevels: readonly Level[] = [
  unknown('sensor', 'Sensor output'),
  unknown('adc', 'Converter input'),
]
