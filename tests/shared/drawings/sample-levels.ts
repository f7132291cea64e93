import type { Ends, Level } from '#shared/design/plan.ts'

interface Given {
  node: string
  title: string
  nominal: [atLow: number, atHigh: number]
  region: [low: number, high: number]
  /** Volts by which any board may lie further out. */
  spread?: number
  gain?: number | null
  /** Ends of the measurand at the nominal ends. */
  span?: [low: number, high: number]
  rule?: number
}

/** A level with everything that follows from its nominal ends by a straight line. */
export function sampleLevel(given: Given): Level {
  const { nominal, region, spread = 0, span = [-0.1, 5.2], rule = 0.03 } = given
  const width = region[1] - region[0]
  const reach: Ends = { low: Math.min(...nominal), high: Math.max(...nominal) }
  const worst: Ends = { low: reach.low - spread, high: reach.high + spread }
  const rooms = (r: Ends): Ends => ({ low: (r.low - region[0]) / width, high: (region[1] - r.high) / width })
  const room = rooms(worst)
  const least = Math.min(room.low, room.high)
  const slope = (span[1] - span[0]) / (nominal[1] - nominal[0])
  const at = (volts: number) => span[0] + slope * (volts - nominal[0])
  const outward = Math.abs(slope) * spread
  // A board that lies further out meets each limit earlier by that much.
  const earlier = (value: number) => value - Math.sign(value - (span[0] + span[1]) / 2) * outward
  const clipsAt: Ends<number | null> = { low: at(region[0]), high: at(region[1]) }
  return {
    node: given.node,
    title: given.title,
    unit: 'V',
    nominal: { low: nominal[0], high: nominal[1] },
    worst,
    region: { low: region[0], high: region[1] },
    limitedBy: 'output swing',
    room,
    nominalRoom: rooms(reach),
    roomAt: { low: 'U1 output', high: 'U1 output' },
    state: least < 0 ? 'over' : least < rule ? 'tight' : 'clear',
    clipsAt,
    worstClipsAt: { low: earlier(at(region[0])), high: earlier(at(region[1])) },
    gain: given.gain ?? null,
  }
}

/** The chain of a stilling-well gauge as a draft that clips: the figures of the interface drawings. */
export const gauge: Level[] = [
  sampleLevel({
    node: 'sensor',
    title: 'Sensor output',
    nominal: [-0.0002, 0.0104],
    region: [-0.001, 0.012],
    spread: 2e-5,
  }),
  sampleLevel({
    node: 'S1',
    title: 'After S1',
    nominal: [0.38, 1.448],
    region: [0.15, 4.85],
    spread: 0.003,
    gain: 100.8,
  }),
  sampleLevel({
    node: 'S2',
    title: 'After S2',
    nominal: [0.228, 4.235],
    region: [0.1, 4.9],
    spread: 0.02,
    gain: 3.75,
  }),
  sampleLevel({
    node: 'adc',
    title: 'Converter input',
    nominal: [0.228, 4.235],
    region: [0, 4.096],
    spread: 0.03,
    gain: 1,
  }),
]

/** An inverting chain. */
export const inverted: Level[] = [
  sampleLevel({
    node: 'sensor',
    title: 'Sensor output',
    nominal: [-0.35, 0.35],
    region: [-0.7, 2.5],
    span: [-2.5, 2.5],
  }),
  sampleLevel({
    node: 'S1',
    title: 'After S1',
    nominal: [2.4, 0.1],
    region: [-0.1, 4.98],
    span: [-2.5, 2.5],
    spread: 0.01,
    gain: -3.2857142857,
  }),
  sampleLevel({
    node: 'adc',
    title: 'Converter input',
    nominal: [2.4, 0.1],
    region: [0, 2.5],
    span: [-2.5, 2.5],
    spread: 0.01,
    gain: 1,
  }),
]
