import type { FilterPlan, StabilityEntry } from '#shared/design/plan.ts'
import type { BodePlot, LoopPlot, NoisePlot, StepPlot } from '#shared/studies/types.ts'
import { formatQuantity, type DecimalSign } from '#shared/units/format-quantity.ts'
import { readCurve, type CurvePlot, type PlotMark } from './curve-plot.ts'

/** The curves of a chain as plots: what is marked, what is held to what, and one sentence for each. */

export interface NamedPlot {
  plot: CurvePlot
  /** For those who do not see it. */
  sentence: string
}

/** Nothing of interest lies below, dB under DC. */
const DEEPEST = -140
/** Loop gain is shown from here, dB. */
const LOOP_FLOOR = -30

interface ResponsePlaces {
  filter: FilterPlan | null
  bandwidth: number | null
  decimalSign?: DecimalSign
}

export function responsePlot(
  bode: BodePlot,
  { filter, bandwidth, decimalSign = '.' }: ResponsePlaces,
): NamedPlot {
  const { frequency } = bode
  const hertz = (value: number) => formatQuantity(value, 'Hz', { digits: 3, decimalSign })
  const decibels = (value: number) => formatQuantity(value, 'dB', { digits: 3, decimalSign })
  const marks: PlotMark[] = []
  if (bandwidth !== null) marks.push({ x: bandwidth, words: `signal, ${hertz(bandwidth)}` })
  if (filter && filter.kind !== 'none' && filter.corner > 0)
    marks.push({ x: filter.corner, words: `corner, ${hertz(filter.corner)}` })
  if (filter?.alias)
    marks.push({ x: filter.alias.frequency, words: `folds back, ${hertz(filter.alias.frequency)}` })
  const band = bode.band
  const corner = crossing(frequency, bode.magnitude, -20 * Math.log10(Math.SQRT2))
  return {
    plot: {
      across: { name: 'Frequency', unit: 'Hz', scale: 'log' },
      panels: [
        {
          name: 'Response against DC',
          unit: 'dB',
          scale: 'linear',
          range: { low: DEEPEST },
          lines: [
            { name: 'nominal', x: frequency, y: bode.magnitude, look: 'signal' },
            ...(band
              ? [
                  { name: 'over tolerance', x: frequency, y: band.low, look: 'band' as const },
                  { name: 'over tolerance', x: frequency, y: band.high, look: 'band' as const },
                ]
              : []),
          ],
          levels: filter?.alias
            ? [{ y: -filter.alias.wanted, words: `wanted ${decibels(-filter.alias.wanted)}` }]
            : [],
        },
        {
          name: 'Phase',
          unit: '°',
          scale: 'linear',
          range: { low: -1080 },
          lines: [{ name: 'nominal', x: frequency, y: bode.phase, look: 'signal' }],
          levels: [],
        },
      ],
      marks,
    },
    sentence:
      corner === null
        ? 'Frequency response from sensor to converter.'
        : `From sensor to converter the response is 3 dB down at ${hertz(corner)}.`,
  }
}

/** Lowest place at which a falling curve passes a value; straight on a logarithmic axis. */
function crossing(x: readonly number[], y: readonly number[], value: number): number | null {
  const i = y.findIndex((level) => level <= value)
  const [x1, x2, y1, y2] = [x[i - 1], x[i], y[i - 1], y[i]]
  if (x1 === undefined || x2 === undefined || y1 === undefined || y2 === undefined) return null
  return x1 * (x2 / x1) ** ((value - y1) / (y2 - y1))
}

interface StepPlaces {
  settling: number | null
  /** LSB that the criterion stands for, and volts in one. */
  criterion: number
  lsb: number
  decimalSign?: DecimalSign
}

export function stepPlot(
  step: StepPlot,
  { settling, criterion, lsb, decimalSign = '.' }: StepPlaces,
): NamedPlot {
  const seconds = (value: number) => formatQuantity(value, 's', { digits: 3, rounding: 'up', decimalSign })
  const within = formatQuantity(criterion, 'LSB', { digits: 3, decimalSign })
  const off = step.output.map((value) => Math.abs(value - step.final) / lsb)
  // Far below the band the distance is that of the arithmetic, not of the circuit.
  const floor = criterion / 50
  return {
    plot: {
      across: { name: 'Time after the step', unit: 's', scale: 'linear', from: 0 },
      panels: [
        {
          name: 'Converter input',
          unit: 'V',
          scale: 'linear',
          lines: [{ name: 'converter input', x: step.time, y: step.output, look: 'signal' }],
          levels: [],
        },
        {
          name: 'Distance from the final value',
          unit: 'LSB',
          scale: 'log',
          range: { low: floor },
          lines: [
            { name: 'distance', x: step.time, y: off.map((value) => Math.max(value, floor)), look: 'signal' },
          ],
          levels: [{ y: criterion, words: `${within}` }],
        },
      ],
      marks: settling === null ? [] : [{ x: settling, words: `within ${within} from ${seconds(settling)}` }],
    },
    sentence:
      settling === null
        ? 'A step over the whole span does not settle in the time that was looked at.'
        : `A step over the whole span stays within ${within} of its final value from ${seconds(settling)} on.`,
  }
}

export function loopPlot(
  loop: LoopPlot,
  entry: StabilityEntry | null,
  decimalSign: DecimalSign = '.',
): NamedPlot {
  const hertz = (value: number) => formatQuantity(value, 'Hz', { digits: 3, decimalSign })
  const degrees = (value: number) => formatQuantity(value, '°', { digits: 3, rounding: 'down', decimalSign })
  const { frequency } = loop
  const crossover = entry?.crossover ?? null
  const phase = crossover === null ? null : readCurve({ x: frequency, y: loop.phase }, crossover, 'log')
  return {
    plot: {
      across: { name: 'Frequency', unit: 'Hz', scale: 'log' },
      panels: [
        {
          name: `Loop gain of ${loop.amplifier}`,
          unit: 'dB',
          scale: 'linear',
          range: { low: LOOP_FLOOR },
          lines: [{ name: 'loop gain', x: frequency, y: loop.magnitude, look: 'signal' }],
          levels: [{ y: 0, words: 'gain of one' }],
        },
        {
          name: 'Phase of the loop',
          unit: '°',
          scale: 'linear',
          range: { low: -360 },
          lines: [{ name: 'phase', x: frequency, y: loop.phase, look: 'signal' }],
          levels: [{ y: -180, words: 'half a turn' }],
          ...(crossover !== null && phase !== null
            ? {
                dimension: {
                  x: crossover,
                  from: -180,
                  to: phase,
                  words: `margin ${degrees(180 + phase)}`,
                  tone: entry?.state === 'clear' ? ('clear' as const) : ('tight' as const),
                },
              }
            : {}),
        },
      ],
      marks: crossover === null ? [] : [{ x: crossover, words: `gain of one at ${hertz(crossover)}` }],
    },
    sentence:
      crossover === null || entry?.phaseMargin === null || entry === null
        ? `The loop of ${loop.amplifier} never has a gain of one.`
        : `The loop of ${loop.amplifier} has a gain of one at ${hertz(crossover)} with a phase margin of ${degrees(entry.phaseMargin)}${entry.worst === null ? '' : `, ${degrees(entry.worst)} at worst`}.`,
  }
}

export function noisePlot(noise: NoisePlot, decimalSign: DecimalSign = '.'): NamedPlot {
  const density = (value: number) => formatQuantity(value, 'V/√Hz', { digits: 3, decimalSign })
  const [from, to] = [noise.frequency[0] ?? 0, noise.frequency.at(-1) ?? 0]
  const most = noise.total.reduce((a, b) => Math.max(a, b), 0)
  const hertz = (value: number) => formatQuantity(value, 'Hz', { digits: 3, decimalSign })
  return {
    plot: {
      across: { name: 'Frequency', unit: 'Hz', scale: 'log' },
      panels: [
        {
          name: 'Noise at the converter',
          unit: 'V/√Hz',
          scale: 'log',
          // Five decades under the highest carry nothing.
          range: { low: most * 1e-5 },
          lines: [
            { name: 'all together', x: noise.frequency, y: noise.total, look: 'signal' },
            ...noise.parts.map((part) => ({ ...part, look: 'other' as const })),
          ],
          levels: [],
        },
      ],
      marks: [],
    },
    sentence: `Noise density at the converter from ${hertz(from)} to ${hertz(to)}; at most ${density(most)}.`,
  }
}
