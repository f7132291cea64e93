import { BLOCK } from '#shared/analysis/board-solver.ts'
import { adjustmentTerms } from '#shared/budget/adjustment-terms.ts'
import type { Condition } from '#shared/budget/error-input.ts'
import { surveyErrors, type ErrorField } from '#shared/budget/error-field.ts'
import { inputTerms, placesOf } from '#shared/budget/error-terms.ts'
import type { Budget, ErrorState, NoiseSummary } from '#shared/design/plan.ts'
import type { Prepared } from '#shared/design/plan-design.ts'
import type { Design } from '#shared/design/schema.ts'
import { SpreadBoards, type Reading } from './spread-boards.ts'
import { describeSample, wilsonInterval } from './spread-figures.ts'
import type { Spread } from './types.ts'

/*
 * Many boards of one chain, each with every uncertain input drawn within its limits, adjusted as a workshop would adjust
 * it, and read. The network is solved in full for each: nothing is taken as small. Source of the method: JCGM 101:2008.
 */

export interface SpreadOptions {
  /** 100 to 1 000 000; absent: as the design says. */
  boards?: number
  /** 0 to 2^31 − 1; absent: as the design says. */
  seed?: number
}

/** Shares of a run after which it tells what it has. */
const STEPS = 64
const SMALLEST_STEP = 16 * BLOCK
/** Boards that are shown one by one. */
const SINGLE_BUILDS = 40

/** Runs a study to its end; `onProgress` sees it grow and stops it by answering false. */
export function runSpread(
  prepared: Prepared,
  options: SpreadOptions & { onProgress?: (spread: Spread) => boolean | void } = {},
): Spread {
  const steps = spreadSteps(prepared, options)
  let stop = false
  for (;;) {
    const { done, value } = steps.next(stop)
    if (done) return value
    stop = options.onProgress?.(value) === false
  }
}

/**
 * The same step by step: yields what there is every so many boards and returns the whole. `next(true)` stops it: it then
 * returns the figures of the boards built so far, the first of those that the whole run would have built. Throws a
 * RangeError for options out of range and for a candidate without its budget.
 */
export function* spreadSteps(
  prepared: Prepared,
  { boards = prepared.design.analysis.boards, seed = prepared.design.analysis.seed }: SpreadOptions = {},
): Generator<Spread, Spread, boolean | undefined> {
  requireInteger('number of boards', boards, 100, 1_000_000)
  requireInteger('seed', seed, 0, 2 ** 31 - 1)
  const study = new Study(prepared, boards, seed)
  const step = Math.max(SMALLEST_STEP, Math.ceil(boards / STEPS / BLOCK) * BLOCK)
  while (study.built < boards) {
    study.build(Math.min(step, boards - study.built))
    if (study.built < boards && (yield study.describe(true))) break
  }
  return study.describe(false)
}

function requireInteger(what: string, value: number, low: number, high: number): void {
  if (!Number.isInteger(value) || value < low || value > high)
    throw new RangeError(`The ${what} is ${value}; it needs a whole number from ${low} to ${high}`)
}

class Study {
  built = 0
  private kept = 0
  private clipped = 0
  private inside = 0
  private readonly errors: Float64Array
  private readonly state: ErrorState
  private readonly budget: Budget
  private readonly worst: WorstPlace
  private readonly readings: Reading[]
  private readonly boards: SpreadBoards
  /** Adjustment readings come last. */
  private readonly adjustments: number
  private readonly resolution: number

  constructor(
    private readonly prepared: Prepared,
    private readonly wanted: number,
    private readonly seed: number,
  ) {
    const { design, spec, candidate } = prepared
    const { budget, noise } = candidate
    if (!budget || !noise)
      throw new RangeError(
        `${candidate.title} has no error budget: only a candidate that was worked out has a spread`,
      )
    this.budget = budget
    this.state = design.target?.state ?? 'calibrated'
    const field = surveyErrors(design, spec, noise)
    this.worst = findWorstPlace(design, field, noise, this.state, budget)
    const single = singleReadings(design, field, this.worst)
    const adjusted = adjustmentReadings(field, this.state)
    this.adjustments = adjusted.length
    this.readings = [...single, ...adjusted]
    const { quantity } = design.sensor
    const slope = field.span / (quantity.high - quantity.low)
    const { input, bits } = design.converter
    this.resolution = (input.high - input.low) / 2 ** bits / Math.abs(slope)
    this.boards = new SpreadBoards(prepared, noise, {
      readings: this.readings,
      slope,
      lines: new Set(budget.lines.map(({ id }) => id)),
      seed,
    })
    this.errors = new Float64Array(wanted)
  }

  build(count: number): void {
    for (let left = count; left > 0; left -= BLOCK) {
      const block = Math.min(BLOCK, left)
      this.boards.next(block)
      for (let board = 0; board < block; board++) this.count(board)
      this.built += block
    }
  }

  private count(board: number): void {
    if (this.boards.clipped[board] === 1) {
      this.clipped += 1
      return
    }
    this.errors[this.kept++] = this.errorAt(0, board)
    const { target, perQuantity } = this.budget
    if (!target) return
    const limit = target.limit / perQuantity
    const single = this.readings.length - this.adjustments
    for (let at = this.worst.isEnd ? 0 : 1; at < single; at++)
      if (!(Math.abs(this.errorAt(at, board)) <= limit)) return
    this.inside += 1
  }

  /** Error of a reading after what the adjustment of this board made of it, in the measurand's unit. */
  private errorAt(at: number, board: number): number {
    const { readings, standards } = this.boards
    const { quantity } = this.readings[at]!
    const read = readings[at]![board]!
    if (this.adjustments === 0) return read - quantity
    // The standard stands at the point stated plus its error, and the board reads it there.
    const first = this.readings.length - this.adjustments
    const stated = this.readings[first]!.quantity
    const found = readings[first]![board]! + standards[0]![board]!
    if (this.adjustments === 1) return read - found + stated - quantity
    const rise = this.readings[first + 1]!.quantity - stated
    const gain = rise / (readings[first + 1]![board]! + standards[1]![board]! - found)
    return stated + (read - found) * gain - quantity
  }

  describe(glance: boolean): Spread {
    const { budget, worst, built, clipped, inside, kept } = this
    const { quantity, temperature } = worst
    const figures = describeSample(this.errors, kept, { glance, resolution: this.resolution })
    const deviation = worst.deviation / budget.perQuantity
    return {
      boards: built,
      wanted: this.wanted,
      seed: this.seed,
      state: this.state,
      at: { quantity, temperature },
      distribution: this.prepared.design.analysis.distribution,
      clipped,
      ...figures,
      worst: { low: -worst.limits / budget.perQuantity, high: worst.limits / budget.perQuantity },
      builds: Array.from(this.errors.subarray(0, Math.min(kept, SINGLE_BUILDS))),
      yield: budget.target
        ? {
            inside,
            share: built > 0 ? inside / built : 0,
            interval: wilsonInterval(inside, Math.max(built, 1)),
          }
        : null,
      budget: {
        deviation,
        difference: deviation > 0 && kept > 1 ? (figures.deviation / deviation - 1) * 100 : 0,
      },
      finished: built === this.wanted,
    }
  }
}

/** Where the budget is largest, with what it says there. */
interface WorstPlace {
  quantity: number
  temperature: number
  condition: Condition
  /** Held there, V; null where it stands in the middle of its range, or there is none. */
  commonMode: number | null
  /** First-order standard deviation and sum of limits, V of y; without the common mode where it is held. */
  deviation: number
  limits: number
  /** True where it is one of the readings of the yield as well. */
  isEnd: boolean
}

/**
 * The budget names measurand and temperature; which end of the common mode and of the sensor's temperature it meant is
 * the one with the largest deviation there.
 */
function findWorstPlace(
  design: Design,
  field: ErrorField,
  noise: NoiseSummary,
  state: ErrorState,
  budget: Budget,
): WorstPlace {
  const total = budget.totals[state]
  const lines = new Set(budget.lines.map(({ id }) => id))
  const terms = [...inputTerms(field), ...adjustmentTerms(design, field, noise)].filter(({ id }) =>
    lines.has(id),
  )
  let best: WorstPlace | null = null
  placesOf(field).forEach((place, at) => {
    if (!near(place.quantity, total.at, field) || !near(place.temperature, total.temperature, field)) return
    const commonMode = field.points[place.point]?.commonMode ?? null
    let [variance, limits] = [0, 0]
    for (const term of terms) {
      if (commonMode !== null && term.id === 'sensor.commonMode') continue
      const left = Math.abs(term.residuals[state][at] ?? 0)
      variance += (left * term.deviation) ** 2
      limits += left * term.limit
    }
    const deviation = Math.sqrt(variance)
    if (best && deviation <= best.deviation) return
    const { quantity, temperature, condition } = place
    const isEnd = commonMode === null && isYieldReading(design, quantity, condition)
    best = { quantity, temperature, condition, commonMode, deviation, limits, isEnd }
  })
  if (!best) throw new RangeError(`The budget was not worked out at ${total.at}, ${total.temperature} °C`)
  return best
}

/** A plan's figures are rounded to twelve digits. */
const near = (exact: number, printed: number, { points }: ErrorField): boolean =>
  Math.abs(exact - printed) <= 1e-9 * Math.max(Math.abs(exact), ...points.map((p) => Math.abs(p.quantity)))

const isYieldReading = (design: Design, quantity: number, { temperature }: Condition): boolean =>
  (quantity === design.sensor.quantity.low || quantity === design.sensor.quantity.high) &&
  (temperature === design.temperature.low || temperature === design.temperature.high)

/** The reading of the histogram first, then both ends of the span at the ends of the temperature, each once. */
function singleReadings(design: Design, field: ErrorField, worst: WorstPlace): Reading[] {
  const { low, high } = design.sensor.quantity
  const single = (quantity: number, condition: Condition): Reading => ({
    quantity,
    condition,
    kind: 'single',
    commonMode: null,
  })
  const ends = [low, high].flatMap((quantity) =>
    field.conditions
      .filter((condition) => isYieldReading(design, quantity, condition))
      .filter((condition) => !(worst.isEnd && quantity === worst.quantity && condition === worst.condition))
      .map((condition) => single(quantity, condition)),
  )
  return [{ ...single(worst.quantity, worst.condition), commonMode: worst.commonMode }, ...ends]
}

function adjustmentReadings({ adjusted, calibration }: ErrorField, state: ErrorState): Reading[] {
  const points = { asBuilt: 0, zeroed: 1, calibrated: 2 }[state]
  return adjusted.slice(0, points).map(({ quantity }) => ({
    quantity,
    condition: calibration,
    kind: 'adjustment',
    commonMode: null,
  }))
}
