import { lusolve } from 'mathjs'
import { openSimulator } from '#server/lib/simulator.ts'
import { BLOCK, compileBoards, type BoardEffect, type BoardSolver } from '#shared/analysis/board-solver.ts'
import { solveDc, type Injection } from '#shared/analysis/dc.ts'
import { toSpice } from '#shared/analysis/spice.ts'
import { assembleSystem } from '#shared/analysis/system.ts'
import { kindOf } from '#shared/network/elements/index.ts'
import type { Network } from '#shared/network/types.ts'
import { createStreams } from '#shared/numerics/random.ts'
import { buildAmplifierPart } from '#tests/support/amplifier-part.ts'
import { Bench } from '#tests/support/circuits.ts'
import { milliseconds, quantile, toRow, type Row } from './rows.ts'

const BOARDS = 100_000
const TURNS = 5
/** Boards of the slower ways; each is then told per board. */
const FEW = { dense: 20_000, apart: 400 }
/** The ways must agree before they are compared, V. */
const AGREEMENT = 1e-6

/**
 * A chain of three amplifiers, a buffered divider at its reference leg, a filter and a load. `apart` gives each amplifier's
 * offset voltage and bias current an element of its own, for a simulator that knows them no other way.
 */
function chain(signal: number, apart = false): Network {
  const bench = new Bench(buildAmplifierPart({ ib: 0 }))
    .v('VSENSE', 'sense', signal)
    .v('VREF', 'vref', 2.5)
    .v('VCM', 'cm', 2.4)
    .e('EP', 'sp', 'cm', 'sense', '0', 0.5)
    .e('EN', 'sn', 'cm', 'sense', '0', -0.5)
    .r('R1', 'o1', 'm1', 1e4)
    .r('R2', 'o2', 'm2', 1e4)
    .r('RG', 'm1', 'm2', 402)
    .r('R3', 'o2', 'm3', 1e4)
    .r('R4', 'm3', 'o3', 1e4)
    .r('R5', 'o1', 'p3', 1e4)
    .r('R6', 'p3', 'lev', 1e4)
    .r('R7', 'vref', 'dv', 1e4)
    .r('R8', 'dv', '0', 6.8e3)
    .r('R9', 'o3', 'adc', 1e3)
    .r('RL', 'adc', '0', 1e6)
    .c('C1', 'adc', '0', 1e-8)
  for (const [n, p, m, out] of AMPLIFIERS) {
    if (apart) bench.v(`VOS${n}`, `in${n}`, 0, p).i(`IB${n}`, `in${n}`, '0', 0)
    bench.u(`U${n}`, apart ? `in${n}` : p, m, out)
  }
  return bench.build()
}

const AMPLIFIERS = [
  [1, 'sp', 'm1', 'o1'],
  [2, 'sn', 'm2', 'o2'],
  [3, 'p3', 'm3', 'o3'],
  [4, 'dv', 'lev', 'lev'],
] as const

const RESISTORS = ['R1', 'R2', 'RG', 'R3', 'R4', 'R5', 'R6', 'R7', 'R8', 'R9', 'RL']

/** The twenty figures that differ from board to board, with their limits. */
function varied(network: Network): BoardEffect[] {
  const effects = network.elements.flatMap((e): Omit<BoardEffect, 'parameter'>[] => {
    if (RESISTORS.includes(e.ref) || e.ref === 'VREF')
      return [{ ref: e.ref, port: 'value', scale: 1e-3 * (kindOf(e).value(e) ?? 0) }]
    if (e.kind !== 'amplifier') return []
    return [
      { ref: e.ref, port: 'vos', scale: 2e-4 },
      { ref: e.ref, port: 'ib+', scale: 5e-12 },
    ]
  })
  return effects.map((effect, parameter) => ({ ...effect, parameter }))
}

/** Draws and solves so many boards; the sum keeps the work from being left out. */
function runBoards(solver: BoardSolver, boards: number, distribution: 'rectangular' | 'normal'): number {
  const count = varied(chain(0)).length
  const streams = createStreams(1, count)
  const amounts = new Float64Array(count * BLOCK)
  const output = solver.voltages(0, 'adc')
  let sum = 0
  for (let built = 0; built < boards; built += BLOCK) {
    const block = Math.min(BLOCK, boards - built)
    streams.forEach((stream, p) => {
      if (distribution === 'normal') stream.fillNormal(amounts, p * BLOCK, block, 3)
      else stream.fillRectangular(amounts, p * BLOCK, block)
    })
    solver.solve(amounts, block)
    for (let i = 0; i < block; i++) sum += output[i]!
  }
  return sum
}

/** The figures of single boards, as the fast way draws them. */
function drawBoards(effects: readonly BoardEffect[], boards: number): Injection[][] {
  const drawn = createStreams(1, effects.length).map((stream) => {
    const numbers = new Float64Array(boards)
    stream.fillRectangular(numbers, 0, boards)
    return numbers
  })
  return Array.from({ length: boards }, (_, board) =>
    effects.map(({ ref, port, scale, parameter }) => ({
      ref,
      port,
      amount: scale * (drawn[parameter]?.[board] ?? Number.NaN),
    })),
  )
}

interface Way {
  microseconds: number
  outputs: number[]
}

/** A general library: its dense solver on the matrix of each board. */
function timeLibrary(network: Network, boards: readonly Injection[][]): Way {
  const systems = boards.map((extra) => {
    const { constant, dc, index } = assembleSystem(network, { model: 'real', extra })
    const rows = index.nodes.concat(index.branches).map((_, row) => row * index.size)
    const matrix = rows.map((start) => Array.from(constant.subarray(start, start + index.size)))
    return { matrix, right: Array.from(dc), at: index.nodeAt.get('adc') ?? 0 }
  })
  let outputs: number[] = []
  const work = () => {
    outputs = systems.map(({ matrix, right, at }) => {
      const solved = lusolve(matrix, right) as number[][]
      return solved[at]?.[0] ?? Number.NaN
    })
  }
  work()
  return { microseconds: (1e3 * milliseconds(work)) / boards.length, outputs }
}

/**
 * The simulator as it can be had here, ngspice as WebAssembly: it has no interactive loop, so each board is a netlist with
 * its values altered, set and asked for `.op`. The netlists are written before the clock starts.
 */
async function timeSimulator(signal: number, boards: readonly Injection[][]): Promise<Way> {
  const network = chain(signal, true)
  const netlists = boards.map((extra) => {
    const changes = new Map(extra.map(({ ref, port, amount }) => [elementOf(ref, port), amount]))
    const elements = network.elements.map((e) => {
      const change = changes.get(e.ref)
      return change === undefined ? e : kindOf(e).withValue(e, (kindOf(e).value(e) ?? 0) + change)
    })
    return toSpice({ ...network, elements })
  })
  const simulator = openSimulator()
  for (const netlist of netlists.slice(0, 20)) await simulator.runOp(netlist)
  const outputs: number[] = []
  const start = performance.now()
  for (const netlist of netlists) outputs.push((await simulator.runOp(netlist)).adc ?? Number.NaN)
  return { microseconds: (1e3 * (performance.now() - start)) / boards.length, outputs }
}

/** `U1` `vos` → `VOS1`. */
const elementOf = (ref: string, port: Injection['port']): string =>
  port === 'vos' ? `VOS${ref.slice(1)}` : port === 'ib+' ? `IB${ref.slice(1)}` : ref

function requireAgreement(
  way: string,
  { outputs }: Way,
  network: Network,
  boards: readonly Injection[][],
): void {
  outputs.forEach((found, i) => {
    const exact = solveDc(network, { model: 'real', extra: boards[i] ?? [] }).output
    if (!(Math.abs(found - exact) <= AGREEMENT))
      throw new Error(`Board ${i} by ${way}: ${found} V instead of ${exact} V; nothing is compared`)
  })
}

function medianOf(work: () => unknown): number {
  work()
  return quantile(
    Array.from({ length: TURNS }, () => milliseconds(work)).sort((a, b) => a - b),
    0.5,
  )
}

/** Many boards of a chain of three amplifiers, in milliseconds and against other ways of the same run. */
export async function run(): Promise<Row[]> {
  const [low, high] = [chain(0), chain(0.01)]
  const effects = varied(low)
  const one = [{ network: low, effects }]
  const both = [...one, { network: high, effects }]
  const options = { model: 'real' } as const
  const pair = compileBoards(both, options)
  const single = compileBoards(one, options)
  const dense = compileBoards(one, { ...options, dense: true })
  const rectangular = medianOf(() => runBoards(pair, BOARDS, 'rectangular'))
  const normal = medianOf(() => runBoards(pair, BOARDS, 'normal'))
  const own = (1e3 * medianOf(() => runBoards(single, BOARDS, 'rectangular'))) / BOARDS
  const alone = (1e3 * medianOf(() => runBoards(dense, FEW.dense, 'rectangular'))) / FEW.dense
  const drawn = drawBoards(effects, FEW.apart)
  const library = timeLibrary(low, drawn)
  requireAgreement('the library', library, low, drawn)
  const simulator = await timeSimulator(0, drawn)
  requireAgreement('the simulator', simulator, low, drawn)
  const size = low.elements.length
  const boards = '100 000 boards, both ends, every node'
  const rate = `${Math.round(1e6 / own / 1e3) * 1e3} boards/s`
  return [
    toRow(
      `${boards}, rectangular (${effects.length} values varied of ${size} elements)`,
      rectangular,
      'ms',
      { most: 200 },
      `Monte Carlo: ${boards}`,
    ),
    toRow(`${boards}, cut normal`, normal, 'ms', { most: 200 }, `Monte Carlo: ${boards}`),
    toRow(`one end, against dense elimination board by board (${rate})`, alone / own, '×', {}),
    toRow(
      `one end, against a general library's dense solver (${library.microseconds.toFixed(0)} µs a board)`,
      library.microseconds / own,
      '×',
      {},
    ),
    toRow(
      `one end, against ngspice (WebAssembly), netlist altered and .op per board (${simulator.microseconds.toFixed(0)} µs)`,
      simulator.microseconds / own,
      '×',
      { least: 600 },
      'Monte Carlo against ngspice (WebAssembly), values altered and .op per board',
    ),
  ]
}
