/*
 * A SPICE simulator as an independent judge, whoever loads it: tests, the page's worker, the server, the command line.
 * Simulators of this kind have habits that would make a check lie: a failed run hands back the data of the run before,
 * a fatal netlist or a second run before the first ends never returns, and everything is printed to the console. Hence
 * one queue, a title that is unique to each run and looked for in the answer, a time limit with a new instance after
 * it, and silence while it works.
 */

interface RealVector {
  name: string
  type: string
  values: number[]
}

interface ComplexVector {
  name: string
  type: string
  values: { real: number; img: number }[]
}

/** What a run answers, as the package gives it. */
export type RawResult = { header: string } & (
  { dataType: 'real'; data: RealVector[] } | { dataType: 'complex'; data: ComplexVector[] }
)

/** As much of the package's simulation as is used here. */
export interface SimulationInstance {
  start(): Promise<void>
  setNetList(netlist: string): void
  runSim(): Promise<RawResult>
  getError(): string[]
}

/** What a simulator needs from where it runs; `shared` itself loads no package and owns neither clock nor console. */
export interface SimulatorHost {
  /** Loads the package; called when the first netlist is run, and its instance is kept. */
  load(): Promise<new () => SimulationInstance>
  /** Runs `work` with the console silenced. */
  quietly<T>(work: () => Promise<T>): Promise<T>
  /** Rejects with the error of `late` where the work takes longer than so many milliseconds. */
  within<T>(work: Promise<T>, milliseconds: number, late: () => Error): Promise<T>
}

export interface AcResult {
  /** Hz */
  frequency: number[]
  /** Node in lower case → phasors, V. */
  nodes: Record<string, { re: number; im: number }[]>
}

export interface NoiseResult {
  /** Hz */
  frequency: number[]
  /** At the output that the netlist names, V/√Hz. */
  density: number[]
}

export interface TranResult {
  /** s */
  time: number[]
  /** Node in lower case → V. */
  nodes: Record<string, number[]>
}

export interface Simulator {
  /** Loads and starts the simulator; a run does it by itself. */
  start(): Promise<void>
  /** Operating point of a netlist that asks for `.op`: node in lower case → V; currents of sources as `i(v1)`. */
  runOp(netlist: string): Promise<Record<string, number>>
  /** Frequency response of a netlist that asks for `.ac`. */
  runAc(netlist: string): Promise<AcResult>
  /** Noise spectrum of a netlist that asks for `.noise`. */
  runNoise(netlist: string): Promise<NoiseResult>
  /** Motion over time of a netlist that asks for `.tran`. */
  runTran(netlist: string): Promise<TranResult>
}

const TIME_LIMIT = 20_000

/** A simulator whose runs stand in one queue. Rejects where it refuses a netlist or gives no answer in 20 s. */
export function createSimulator(host: SimulatorHost, timeLimit = TIME_LIMIT): Simulator {
  let instance: Promise<SimulationInstance> | null = null
  let queue: Promise<unknown> = Promise.resolve()
  let runs = 0

  const open = async (): Promise<SimulationInstance> => {
    const Simulation = await host.load()
    const simulation = new Simulation()
    await simulation.start()
    return simulation
  }

  const late = () => new Error(`The simulator gave no answer in ${timeLimit / 1000} s`)

  const runNow = async (netlist: string): Promise<RawResult> => {
    try {
      instance ??= open()
      // Loading is the network's time, not the simulator's: no limit.
      const simulation = await instance
      const [first = '', ...rest] = netlist.split('\n')
      const title = `run ${++runs} of ${first}`.trim()
      simulation.setNetList([title, ...rest].join('\n'))
      const result = await host.within(simulation.runSim(), timeLimit, late)
      const answered = /^Title: *(.*)$/m.exec(result.header)?.[1]?.trim()
      if (answered?.toLowerCase() !== title.toLowerCase())
        throw new Error(`The simulator refused the netlist: ${simulation.getError().join(' / ')}`)
      return result
    } catch (error) {
      instance = null
      throw error
    }
  }

  const enqueue = <T>(work: () => Promise<T>): Promise<T> => {
    const next = queue.then(() => host.quietly(work))
    queue = next.catch(() => undefined)
    return next
  }

  const run = (netlist: string) => enqueue(() => runNow(netlist))

  return {
    async start() {
      await enqueue(async () => {
        instance ??= open()
        try {
          await instance
        } catch (error) {
          instance = null
          throw error
        }
      })
    },
    runOp: async (netlist) => toOp(await run(netlist)),
    runAc: async (netlist) => toAc(await run(netlist)),
    runNoise: async (netlist) => toNoise(await run(netlist)),
    runTran: async (netlist) => toTran(await run(netlist)),
  }
}

function toOp(result: RawResult): Record<string, number> {
  if (result.dataType !== 'real') throw new Error('The operating point came back as complex numbers')
  return Object.fromEntries(result.data.map(({ name, values }) => [toNode(name), values[0] ?? Number.NaN]))
}

function toAc(result: RawResult): AcResult {
  if (result.dataType !== 'complex') throw new Error('The frequency response came back as real numbers')
  const nodes: AcResult['nodes'] = {}
  let frequency: number[] = []
  for (const { name, type, values } of result.data) {
    if (type === 'frequency') frequency = values.map(({ real }) => real)
    else nodes[toNode(name)] = values.map(({ real, img }) => ({ re: real, im: img }))
  }
  return { frequency, nodes }
}

function toNoise(result: RawResult): NoiseResult {
  if (result.dataType !== 'real') throw new Error('The noise came back as complex numbers')
  const find = (wanted: string): number[] => {
    const found = result.data.find(({ name }) => name.toLowerCase() === wanted)
    if (!found) throw new Error(`The noise came back without ${wanted}`)
    return found.values
  }
  return { frequency: find('frequency'), density: find('onoise_spectrum') }
}

function toTran(result: RawResult): TranResult {
  if (result.dataType !== 'real') throw new Error('The motion over time came back as complex numbers')
  const nodes: TranResult['nodes'] = {}
  let time: number[] = []
  for (const { name, type, values } of result.data) {
    if (type === 'time') time = values
    else nodes[toNode(name)] = values
  }
  return { time, nodes }
}

const toNode = (name: string): string => /^v\((.*)\)$/i.exec(name)?.[1]?.toLowerCase() ?? name.toLowerCase()
