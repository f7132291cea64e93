import type { Ends, ErrorState } from '#shared/design/plan.ts'

/** What is computed on request, outside the plan: the spread of boards, and curves for plots. SI units, plain data. */

export interface Histogram {
  /** Edges in the measurand's unit, one more than counts. */
  edges: number[]
  counts: number[]
}

/** A Monte Carlo run, complete or stopped: error of the reading in the measurand's unit. */
export interface Spread {
  boards: number
  wanted: number
  seed: number
  state: ErrorState
  /** Condition at which the histogram is taken: the budget's own worst point. */
  at: { quantity: number; temperature: number }
  distribution: string
  /** Boards on which a pin or the converter clips somewhere in the span; counted, and left out of the figures. */
  clipped: number
  mean: number
  deviation: number
  /** [share, error]: 0.001, 0.025, 0.05, 0.25, 0.5, 0.75, 0.95, 0.975, 0.999. */
  quantiles: [number, number][]
  histogram: Histogram
  /** Worst-case limits of the budget at the same condition. */
  worst: Ends
  /** Errors of the first forty boards. */
  builds: number[]
  /** Share of boards inside the target over the whole span and temperature (a clipping board is outside), with its
   * interval (Wilson score, 95 %); null without a target. */
  yield: { inside: number; share: number; interval: Ends } | null
  /** Standard deviation and mean by first-order budget at the same condition, and how much the run differs, %. */
  budget: { deviation: number; difference: number }
  finished: boolean
}

/** Points of one line of a plot. */
export interface Curve {
  name: string
  x: number[]
  y: number[]
}

export interface BodePlot {
  /** Hz */
  frequency: number[]
  /** dB relative to DC, and degrees. */
  magnitude: number[]
  phase: number[]
  /** Lowest and highest magnitude over the tolerance of the parts, dB. */
  band: { low: number[]; high: number[] } | null
}

export interface StepPlot {
  /** s and V at the converter, for a step from the low to the high end of the span. */
  time: number[]
  output: number[]
  final: number
  /** Half width of the settling band, V. */
  band: number
}

export interface LoopPlot {
  amplifier: string
  frequency: number[]
  /** dB and degrees of loop gain. */
  magnitude: number[]
  phase: number[]
}

export interface NoisePlot {
  frequency: number[]
  /** V/√Hz of y, all sources and the largest few. */
  total: number[]
  parts: Curve[]
}

export interface Curves {
  bode: BodePlot
  step: StepPlot
  loops: LoopPlot[]
  noise: NoisePlot
}
