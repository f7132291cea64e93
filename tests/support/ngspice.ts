import { Simulation } from 'eecircuit-engine'
import type { ResultType } from 'eecircuit-engine'

/*
 * ngspice as an independent judge. The engine has habits that would make a check lie: a failed run hands back the data
 * of the run before, a fatal netlist or a second run before the first ends never returns, and it prints to the console.
 * Hence one queue, a title that is unique to each run and looked for in the answer, a time limit with a new engine after
 * it, and a silent console.
 */

const TIME_LIMIT = 20_000

let engine: Promise<Simulation> | null = null
let queue: Promise<unknown> = Promise.resolve()
let runs = 0

/** Operating point of a netlist that asks for `.op`: node in lower case → V; currents of sources as `i(v1)`. */
export async function runOp(netlist: string): Promise<Record<string, number>> {
  const result = await run(netlist)
  if (result.dataType !== 'real') throw new Error('The operating point came back as complex numbers')
  return Object.fromEntries(result.data.map(({ name, values }) => [toNode(name), values[0] ?? Number.NaN]))
}

export interface AcResult {
  /** Hz */
  frequency: number[]
  /** Node in lower case → phasors, V. */
  nodes: Record<string, { re: number; im: number }[]>
}

/** Frequency response of a netlist that asks for `.ac`. */
export async function runAc(netlist: string): Promise<AcResult> {
  const result = await run(netlist)
  if (result.dataType !== 'complex') throw new Error('The frequency response came back as real numbers')
  const nodes: AcResult['nodes'] = {}
  let frequency: number[] = []
  for (const { name, type, values } of result.data) {
    if (type === 'frequency') frequency = values.map(({ real }) => real)
    else nodes[toNode(name)] = values.map(({ real, img }) => ({ re: real, im: img }))
  }
  return { frequency, nodes }
}

function run(netlist: string): Promise<ResultType> {
  const next = queue.then(() => runNow(netlist))
  queue = next.catch(() => undefined)
  return next
}

async function runNow(netlist: string): Promise<ResultType> {
  const restore = silence()
  try {
    engine ??= start()
    const simulation = await withinTime(engine)
    const title = `run ${++runs} of ${netlist.split('\n', 1)[0] ?? ''}`
    simulation.setNetList([title, ...netlist.split('\n').slice(1)].join('\n'))
    const result = await withinTime(simulation.runSim())
    const answered = /^Title: *(.*)$/m.exec(result.header)?.[1]?.trim()
    if (answered?.toLowerCase() !== title.trim().toLowerCase()) {
      throw new Error(`ngspice refused the netlist: ${simulation.getError().join(' / ')}`)
    }
    return result
  } catch (error) {
    engine = null
    throw error
  } finally {
    restore()
  }
}

async function start(): Promise<Simulation> {
  const simulation = new Simulation()
  await simulation.start()
  return simulation
}

async function withinTime<T>(work: Promise<T>): Promise<T> {
  let timer: NodeJS.Timeout | undefined
  const limit = new Promise<never>((_, reject) => {
    timer = setTimeout(
      () => reject(new Error(`ngspice gave no answer in ${TIME_LIMIT / 1000} s`)),
      TIME_LIMIT,
    )
  })
  try {
    return await Promise.race([work, limit])
  } finally {
    clearTimeout(timer)
  }
}

function silence(): () => void {
  const kept = { log: console.log, info: console.info, warn: console.warn, error: console.error }
  Object.assign(console, { log: quiet, info: quiet, warn: quiet, error: quiet })
  return () => Object.assign(console, kept)
}

const quiet = (): void => undefined

const toNode = (name: string): string => /^v\((.*)\)$/i.exec(name)?.[1]?.toLowerCase() ?? name.toLowerCase()
