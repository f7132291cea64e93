import { solveAc } from '#shared/analysis/ac.ts'
import { solveDc } from '#shared/analysis/dc.ts'
import { toSpice } from '#shared/analysis/spice.ts'
import { buildChain, type Chain } from '#shared/design/chain.ts'
import type { CheckLine, IndependentCheck, Plan } from '#shared/design/plan.ts'
import { prepareCandidate, type Prepared } from '#shared/design/plan-design.ts'
import type { Network } from '#shared/network/types.ts'
import { formatQuantity } from '#shared/units/format-quantity.ts'
import { ALLOWED, compareFigures, type CheckRun } from './check-line.ts'
import { noiseRun } from './check-noise.ts'
import type { Simulator } from './simulator.ts'

/*
 * The network of a candidate, printed as the SPICE text of the plan and solved by another program: operating point at
 * both ends and in the middle of the span, response at the signal bandwidth and at the filter's corner, noise. The two
 * share the netlist, not the solver: what is compared are two ways of solving the same circuit. That the circuit is the
 * right one is for the closed form of its arrangement to show.
 */

const SIMULATOR = 'ngspice 45.2'

/** The netlists of a candidate, in the order in which they are run. Pure: nothing is run yet. */
export function checkRuns(prepared: Prepared): CheckRun[] {
  const { design, spec, candidate } = prepared
  const { low, high } = design.sensor.quantity
  const chainAt = (quantity: number) => buildChain(design, spec, quantity)
  const chains = { low: chainAt(low), middle: chainAt((low + high) / 2), high: chainAt(high) }
  const [y0, y1] = [chains.low, chains.high].map(({ network }) => solveDc(network, { model: 'real' }).output)
  const allowed = ALLOWED.point * Math.abs((y1 ?? 0) - (y0 ?? 0))
  const corner = candidate.filter?.corner ?? 0
  const places: [string, number | undefined][] = [
    ['signal bandwidth', design.sensor.bandwidth],
    ['filter corner', corner > 0 ? corner : undefined],
  ]
  const noise = noiseRun(prepared, chains.low)
  return [
    // The low end is run from the very text that the plan prints.
    pointRun('low end', chains.low, allowed, candidate.netlist),
    pointRun('middle', chains.middle, allowed),
    pointRun('high end', chains.high, allowed),
    ...places.flatMap(([where, frequency]) =>
      frequency === undefined ? [] : [responseRun(where, chains.low, frequency)],
    ),
    ...(noise ? [noise] : []),
  ]
}

/** Runs all of them, one after the other. Rejects where the simulator refuses a netlist or does not answer. */
export async function runCheck(
  prepared: Prepared,
  simulator: Simulator,
  onProgress: (done: number, of: number) => void = () => undefined,
): Promise<IndependentCheck> {
  const runs = checkRuns(prepared)
  const lines: CheckLine[] = []
  for (const [done, run] of runs.entries()) {
    onProgress(done, runs.length)
    lines.push(...(await run.judge(simulator)))
  }
  onProgress(runs.length, runs.length)
  return { simulator: SIMULATOR, lines, ok: lines.every((line) => line.ok) }
}

/** Of a simulator that failed: nothing was compared, so nothing is right. */
export const unanswered: IndependentCheck = { simulator: SIMULATOR, lines: [], ok: false }

/** The check of the candidate that a plan chose; null where it chose none. */
export async function checkChosen(
  document: unknown,
  plan: Plan,
  simulator: Simulator,
): Promise<IndependentCheck | null> {
  const candidate = plan.chosen === null ? undefined : plan.candidates[plan.chosen]
  const prepared = candidate ? prepareCandidate(document, candidate) : null
  return prepared ? runCheck(prepared, simulator) : null
}

/** The plan with the check at the candidate that it chose. */
export function withCheck(plan: Plan, check: IndependentCheck | null): Plan {
  if (!check) return plan
  return {
    ...plan,
    candidates: plan.candidates.map((candidate, at) =>
      at === plan.chosen ? { ...candidate, check } : candidate,
    ),
  }
}

function pointRun(end: string, chain: Chain, allowed: number, printed?: string): CheckRun {
  const { network } = chain
  const what = `Operating point, ${end}`
  const netlist = printed ?? toSpice(network, { analysis: 'op' })
  return {
    what,
    netlist,
    async judge(simulator) {
      const spice = await simulator.runOp(netlist)
      const ours = solveDc(network, { model: 'real' })
      const at = (node: string) => (node === '0' ? 0 : (spice[node.toLowerCase()] ?? Number.NaN))
      const { p, n } = network.output
      const nodes = Object.entries(ours.voltages).map(([node, voltage]) => ({
        node,
        pair: [voltage, at(node)] as const,
      }))
      const off = ({ pair: [a, b] }: (typeof nodes)[number]) => (Number.isNaN(b) ? Infinity : Math.abs(a - b))
      const farthest = nodes.reduce((worst, next) => (off(next) > off(worst) ? next : worst))
      return [
        compareFigures(what, 'V', [ours.output, at(p) - at(n)], allowed),
        compareFigures(
          `${what}: node ${farthest.node}, the farthest of ${nodes.length}`,
          'V',
          farthest.pair,
          allowed,
        ),
      ]
    },
  }
}

function responseRun(where: string, chain: Chain, frequency: number): CheckRun {
  const { network } = chain
  const at = `at ${formatQuantity(frequency, 'Hz', { digits: 4 })}, ${where}`
  const netlist = toSpice(network, {
    analysis: { ac: { pointsPerDecade: 1, from: frequency, to: frequency } },
  })
  return {
    what: `Gain ${at}`,
    netlist,
    async judge(simulator) {
      const { nodes } = await simulator.runAc(netlist)
      const ours = solveAc(network, frequency, { model: 'real' }).output
      const spice = outputOf(network, (node) => nodes[node.toLowerCase()]?.[0])
      const size = Math.hypot(spice.re, spice.im)
      const turn = Math.atan2(
        ours.im * spice.re - ours.re * spice.im,
        ours.re * spice.re + ours.im * spice.im,
      )
      const degrees = 180 / Math.PI
      const phase = Math.atan2(spice.im, spice.re) * degrees
      return [
        compareFigures(`Gain ${at}`, 'V/V', [Math.hypot(ours.re, ours.im), size], ALLOWED.response * size),
        // A thousandth of the phasor, turned by a right angle.
        compareFigures(`Phase ${at}`, '°', [phase + turn * degrees, phase], ALLOWED.response * degrees),
      ]
    },
  }
}

interface Phasor {
  re: number
  im: number
}

function outputOf({ output }: Network, at: (node: string) => Phasor | undefined): Phasor {
  const missing = { re: Number.NaN, im: Number.NaN }
  const of = (node: string): Phasor => (node === '0' ? { re: 0, im: 0 } : (at(node) ?? missing))
  const [p, n] = [of(output.p), of(output.n)]
  return { re: p.re - n.re, im: p.im - n.im }
}
