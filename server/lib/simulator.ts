import { createSimulator, type Simulator, type SimulatorHost } from '#shared/studies/simulator.ts'

const quiet = (): void => undefined

/** Node as the place where the simulator runs; the package (20 MB) is loaded when the first netlist is run. */
const host: SimulatorHost = {
  load: async () => (await import('eecircuit-engine')).Simulation,
  async quietly(work) {
    const { log, info, warn, error } = console
    Object.assign(console, { log: quiet, info: quiet, warn: quiet, error: quiet })
    try {
      return await work()
    } finally {
      Object.assign(console, { log, info, warn, error })
    }
  },
  async within(work, milliseconds, late) {
    let timer: NodeJS.Timeout | undefined
    const limit = new Promise<never>((_, reject) => {
      timer = setTimeout(() => reject(late()), milliseconds)
    })
    try {
      return await Promise.race([work, limit])
    } finally {
      clearTimeout(timer)
    }
  },
}

/** The independent simulator, one instance with a queue before it. */
export const openSimulator = (): Simulator => createSimulator(host)
