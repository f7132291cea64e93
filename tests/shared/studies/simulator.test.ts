import { describe, expect, it } from 'vitest'
import {
  createSimulator,
  type RawResult,
  type SimulationInstance,
  type SimulatorHost,
} from '#shared/studies/simulator.ts'

type Behaviour = (netlist: string) => RawResult | 'the run before' | 'never'

const opOf = (netlist: string, value: number): RawResult => ({
  header: `Title: ${netlist.split('\n')[0]}\nPlotname: Operating Point`,
  dataType: 'real',
  data: [{ name: 'V(OUT)', type: 'voltage', values: [value] }],
})

/** A simulator with the habits of the real one, and a host whose time is counted by hand. */
function bench(behaviour: Behaviour) {
  const log = { opened: 0, netlists: [] as string[], atOnce: 0, most: 0, quiet: 0 }
  class Instance implements SimulationInstance {
    private netlist = ''
    private last: RawResult = { header: 'Title: none', dataType: 'real', data: [] }
    start() {
      log.opened += 1
      return Promise.resolve()
    }
    setNetList(netlist: string) {
      this.netlist = netlist
      log.netlists.push(netlist)
    }
    async runSim() {
      log.atOnce += 1
      log.most = Math.max(log.most, log.atOnce)
      await Promise.resolve()
      const answer = behaviour(this.netlist)
      if (answer === 'never') return new Promise<RawResult>(() => undefined)
      log.atOnce -= 1
      if (answer !== 'the run before') this.last = answer
      return this.last
    }
    getError() {
      return ['no such element']
    }
  }
  const host: SimulatorHost = {
    load: () => Promise.resolve(Instance),
    quietly: (work) => {
      log.quiet += 1
      return work()
    },
    // Whatever has not answered after a few turns of the loop is late.
    within: (work, _, late) =>
      Promise.race([work, new Promise<never>((_resolve, reject) => setTimeout(() => reject(late()), 20))]),
  }
  return { log, simulator: createSimulator(host, 5000) }
}

describe('the simulator', () => {
  it('is loaded once, when the first netlist is run, and only talks in silence', async () => {
    const { log, simulator } = bench((netlist) => opOf(netlist, 2.5))
    expect(log.opened).toBe(0)
    expect(await simulator.runOp('Level shift\n.op\n.end')).toEqual({ out: 2.5 })
    expect(await simulator.runOp('Level shift\n.op\n.end')).toEqual({ out: 2.5 })
    expect(log.opened).toBe(1)
    expect(log.quiet).toBe(2)
    // The title that stood there is replaced by one that no other run has.
    const titles = log.netlists.map((netlist) => netlist.split('\n')[0])
    expect(new Set(titles).size).toBe(2)
    for (const title of titles) expect(title).toContain('Level shift')
  })

  it('takes one netlist after the other', async () => {
    const { log, simulator } = bench((netlist) => opOf(netlist, netlist.includes('.two') ? 2 : 1))
    const answers = await Promise.all(['.one', '.two', '.one'].map((line) => simulator.runOp(`x\n${line}`)))
    expect(answers.map(({ out }) => out)).toEqual([1, 2, 1])
    expect(log.most).toBe(1)
  })

  it('does not take the answer of the run before for its own', async () => {
    const { log, simulator } = bench((netlist) =>
      netlist.includes('.broken') ? 'the run before' : opOf(netlist, 3),
    )
    await simulator.runOp('good\n.op')
    await expect(simulator.runOp('bad\n.broken')).rejects.toThrow('refused the netlist: no such element')
    expect(await simulator.runOp('good\n.op')).toEqual({ out: 3 })
    expect(log.opened).toBe(2)
  })

  it('gives up a run that never ends, and starts anew', async () => {
    const { log, simulator } = bench((netlist) => (netlist.includes('.hang') ? 'never' : opOf(netlist, 4)))
    await expect(simulator.runOp('x\n.hang')).rejects.toThrow('gave no answer in 5 s')
    expect(await simulator.runOp('x\n.op')).toEqual({ out: 4 })
    expect(log.opened).toBe(2)
  })

  it('refuses an answer of another kind than it asked for', async () => {
    const { simulator } = bench((netlist) => opOf(netlist, 1))
    await expect(simulator.runAc('x\n.ac')).rejects.toThrow('real numbers')
    await expect(simulator.runNoise('x\n.noise')).rejects.toThrow('without frequency')
  })
})
