import {
  BLOCK,
  compileBoards,
  type BoardCase,
  type BoardEffect,
  type BoardSolver,
} from '#shared/analysis/board-solver.ts'
import { solveDc } from '#shared/analysis/dc.ts'
import type { Pin } from '#shared/amplifiers/stage-builder.ts'
import { AVERAGED_READINGS } from '#shared/budget/adjustment-terms.ts'
import { CUT, factorOf, type Condition, type ErrorInput } from '#shared/budget/error-input.ts'
import { errorInputs } from '#shared/budget/error-inputs.ts'
import { buildChain, type Chain } from '#shared/design/chain.ts'
import { toCode } from '#shared/design/codes.ts'
import type { Distribution, NoiseSummary } from '#shared/design/plan.ts'
import type { Prepared } from '#shared/design/plan-design.ts'
import type { Converter } from '#shared/design/schema.ts'
import { kindOf } from '#shared/network/elements/index.ts'
import type { Network } from '#shared/network/types.ts'
import { createStreams, type RandomStream } from '#shared/numerics/random.ts'

/** One reading of a board: what is measured, and under what. */
export interface Reading {
  quantity: number
  condition: Condition
  /** `adjustment`: the average of many readings with everything else that is new at each reading left at nominal. */
  kind: 'single' | 'adjustment'
  /** Common mode held there, V; null: as it comes. */
  commonMode: number | null
}

/** Something drawn: once per board, or once per reading. */
interface Variable {
  limit: number
  distribution: Distribution
  deviations: number
}

/** What a drawn number does behind the network. */
interface OutputEffect {
  parameter: number
  factor: number
  kind: 'reference' | 'fixed' | 'fresh'
  change: (y: number) => number
}

interface Place {
  reading: Reading
  pins: readonly Pin[]
  outputs: OutputEffect[]
  /** y of the nominal board, V, on which the firmware's own line is built. */
  nominal: number
}

/** Less than this beyond a limit is rounding, V. */
const ROUNDING = 1e-9

/**
 * The boards of a study: draws them block by block, solves their networks at every reading and says what the firmware
 * reads. Board i depends on the seed alone: every variable has a stream of its own and takes one number per board.
 */
export class SpreadBoards {
  /** Readings of the measurand, one array of `BLOCK` per reading, written anew by each block. */
  readonly readings: Float64Array[]
  /** 1 where a pin or the converter clips at any reading. */
  readonly clipped = new Uint8Array(BLOCK)
  /** Error of the standard at each adjustment, in the measurand's unit. */
  readonly standards: Float64Array[]
  private readonly variables: Variable[] = []
  private readonly streams: RandomStream[]
  private readonly amounts: Float64Array
  private readonly places: Place[]
  private readonly solver: BoardSolver
  private readonly converter: Converter
  private readonly perQuantity: number
  private readonly output: { p: string; n: string }
  private readonly standardAt: number[]
  private readonly y = new Float64Array(BLOCK)
  private readonly settled = new Float64Array(BLOCK)

  /** `slope`: V of y per unit of the measurand, with its sign. `lines`: inputs that the budget counts. */
  constructor(
    { design, spec }: Prepared,
    noise: NoiseSummary,
    given: { readings: readonly Reading[]; slope: number; lines: ReadonlySet<string>; seed: number },
  ) {
    this.converter = { ...design.converter, coding: 'straight' }
    this.perQuantity = given.slope
    const chains = new Map<number, { chain: Chain; inputs: ErrorInput[]; nominal: number }>()
    const chainAt = (quantity: number) => {
      const known = chains.get(quantity)
      if (known) return known
      const chain = buildChain(design, spec, quantity)
      const solution = solveDc(chain.network, { model: 'real' })
      const inputs = errorInputs(design, chain, noise, (node) => solution.voltage(node))
      const made = { chain, inputs, nominal: solution.output }
      chains.set(quantity, made)
      return made
    }
    const first = chainAt(given.readings[0]?.quantity ?? design.sensor.quantity.low)
    const shared = first.inputs.map((input) =>
      input.behaviour === 'resolution' ? -1 : this.declare(input, input.limit),
    )
    const rails = this.declareRails(first.chain, first.inputs, design.analysis.distribution)
    const cases: BoardCase[] = []
    this.places = given.readings.map((reading) => {
      const { chain, inputs, nominal } = chainAt(reading.quantity)
      const values = new Map(chain.network.elements.map((e) => [e.ref, kindOf(e).value(e) ?? 0]))
      const effects: BoardEffect[] = [...rails]
      const outputs: OutputEffect[] = []
      inputs.forEach((input, i) => {
        if (!isCounted(input, given.lines)) return
        const parameter = shared[i] === -1 ? this.declareFresh(input, reading) : shared[i]!
        if (parameter === null) return
        const factor = factorOf(input, reading.condition)
        for (const { ref, port, scale, relative } of input.effects) {
          const own = relative ? (values.get(ref) ?? 0) : 1
          effects.push({ parameter, ref, port, scale: scale * own * factor })
        }
        if (input.onOutput) {
          const kind =
            input.source === chain.references.converter?.variable
              ? 'reference'
              : input.behaviour === 'resolution'
                ? 'fresh'
                : 'fixed'
          outputs.push({ parameter, factor, kind, change: input.onOutput })
        }
      })
      cases.push({ network: holdCommonMode(chain, reading.commonMode), effects })
      return { reading, pins: chain.pins, outputs, nominal }
    })
    const { standardUncertainty } = design.calibration
    const { quantity } = design.sensor
    const standard = standardUncertainty * Math.abs(quantity.high - quantity.low)
    this.standardAt = given.readings
      .filter(({ kind }) => kind === 'adjustment')
      .map(() => this.declare({ distribution: design.analysis.distribution }, standard))
    this.streams = createStreams(given.seed, this.variables.length)
    this.amounts = new Float64Array(this.variables.length * BLOCK)
    this.standards = this.standardAt.map((p) => this.amounts.subarray(p * BLOCK, (p + 1) * BLOCK))
    this.readings = given.readings.map(() => new Float64Array(BLOCK))
    this.output = first.chain.network.output
    this.solver = compileBoards(cases, {
      model: 'real',
      references: Object.fromEntries(first.chain.errors.map((e) => [e.ref, e.reference])),
      watch: watched(first.chain, this.output),
    })
  }

  /** The next `count` boards, at most `BLOCK`. */
  next(count: number): void {
    this.variables.forEach(({ limit, distribution, deviations }, p) => {
      const start = p * BLOCK
      const stream = this.streams[p]!
      if (distribution === 'normal') stream.fillNormal(this.amounts, start, count, deviations)
      else stream.fillRectangular(this.amounts, start, count)
      for (let i = start; i < start + count; i++) this.amounts[i]! *= limit
    })
    this.solver.solve(this.amounts, count)
    this.clipped.fill(0)
    this.places.forEach((place, at) => {
      this.judgePins(place, at, count)
      this.read(place, at, count)
    })
  }

  private declare(
    { distribution, deviations }: Pick<ErrorInput, 'distribution' | 'deviations'>,
    limit: number,
  ): number {
    return this.variables.push({ limit, distribution, deviations: deviations ?? CUT }) - 1
  }

  /** A variable that is new at this reading; null for one that an adjustment averages away or the converter itself makes. */
  private declareFresh(input: ErrorInput, { kind, commonMode }: Reading): number | null {
    if (input.id === 'converter.quantisation') return null
    if (input.id === 'sensor.commonMode' && commonMode !== null) return null
    if (kind === 'single') return this.declare(input, input.limit)
    return input.id === 'noise' ? this.declare(input, input.limit / Math.sqrt(AVERAGED_READINGS)) : null
  }

  /** Rails move the limits of the pins even where they move nothing else. */
  private declareRails(
    chain: Chain,
    inputs: readonly ErrorInput[],
    distribution: Distribution,
  ): BoardEffect[] {
    return chain.variables
      .filter(({ id }) => id === 'positiveRail' || id === 'negativeRail')
      .filter(({ id, low, high }) => high > low && !inputs.some(({ source }) => source === id))
      .flatMap(({ low, high, injections }) => {
        const parameter = this.declare({ distribution }, (high - low) / 2)
        return injections.map((injection) => ({ parameter, ...injection }))
      })
  }

  /** Marks boards on which a pin leaves its range, judged as the headroom is. */
  private judgePins({ pins }: Place, at: number, count: number): void {
    const { solver, clipped } = this
    const top = solver.voltages(at, 'vpos')
    const bottom = solver.voltages(at, 'vneg')
    for (const pin of pins) {
      const volts = solver.voltages(at, pin.judged ?? pin.node)
      const { low, high, swing } = pin
      const delivered = swing && (swing.low > 0 || swing.high > 0) ? solver.currents(at, swing.ref) : null
      for (let i = 0; i < count; i++) {
        const amps = delivered ? delivered[i]! : 0
        const least = bottom[i]! + low + Math.max(0, -amps) * (swing?.low ?? 0)
        const most = top[i]! - high - Math.max(0, amps) * (swing?.high ?? 0)
        // Written so that a board without an answer counts as clipped too.
        if (!(volts[i]! >= least - ROUNDING && volts[i]! <= most + ROUNDING)) clipped[i] = 1
      }
    }
  }

  /** What the firmware makes of the voltage at the converter: a code, and with the nominal line the measurand. */
  private read({ outputs, nominal, reading }: Place, at: number, count: number): void {
    const { solver, amounts, y, settled, clipped, converter } = this
    const p = solver.voltages(at, this.output.p)
    const n = solver.voltages(at, this.output.n)
    settled.fill(1)
    for (const { kind, parameter, factor } of outputs)
      if (kind === 'reference')
        for (let i = 0; i < count; i++) settled[i]! += factor * amounts[parameter * BLOCK + i]!
    for (let i = 0; i < count; i++) y[i] = settled[i] = (p[i]! - n[i]!) / settled[i]!
    this.addOutputs(outputs, 'fixed', count)
    const { low, high } = converter.input
    for (let i = 0; i < count; i++) if (!(y[i]! >= low - ROUNDING && y[i]! <= high + ROUNDING)) clipped[i] = 1
    this.addOutputs(outputs, 'fresh', count)
    const lsb = (high - low) / 2 ** converter.bits
    const found = this.readings[at]!
    for (let i = 0; i < count; i++) {
      const code = toCode(converter, y[i]!)
      found[i] = reading.quantity + (low + code * lsb - nominal) / this.perQuantity
    }
  }

  private addOutputs(outputs: readonly OutputEffect[], wanted: OutputEffect['kind'], count: number): void {
    const { y, settled, amounts } = this
    for (const { kind, parameter, factor, change } of outputs) {
      if (kind !== wanted) continue
      for (let i = 0; i < count; i++) y[i]! += factor * amounts[parameter * BLOCK + i]! * change(settled[i]!)
    }
  }
}

/** Self-heating too small for the budget would only give every end of the span a matrix of its own. */
const isCounted = (input: ErrorInput, lines: ReadonlySet<string>): boolean =>
  !input.id.endsWith('.selfHeating') || lines.has(input.id)

function holdCommonMode({ network, variables }: Chain, volts: number | null): Network {
  const ref = variables.find(({ id }) => id === 'commonMode')?.injections[0]?.ref
  if (volts === null || ref === undefined) return network
  const elements = network.elements.map((e) => (e.ref === ref ? kindOf(e).withValue(e, volts) : e))
  return { ...network, elements }
}

function watched({ pins }: Chain, output: { p: string; n: string }): { nodes: string[]; branches: string[] } {
  const swings = pins.flatMap(({ swing }) => (swing && (swing.low > 0 || swing.high > 0) ? [swing.ref] : []))
  return {
    nodes: ['vpos', 'vneg', output.p, output.n, ...pins.map((pin) => pin.judged ?? pin.node)],
    branches: swings,
  }
}
