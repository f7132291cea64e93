import { describe, expect, it } from 'vitest'
import { BLOCK, compileBoards, type BoardCase, type BoardEffect } from '#shared/analysis/board-solver.ts'
import { solveDc, type Injection } from '#shared/analysis/dc.ts'
import { indexUnknowns } from '#shared/analysis/system.ts'
import { kindOf } from '#shared/network/elements/index.ts'
import { portNames, type Model } from '#shared/network/elements/element-kind.ts'
import type { Network, NetworkElement } from '#shared/network/types.ts'
import { Bench, sampleNetworks } from '#tests/support/circuits.ts'
import { expectClose } from '#tests/support/expect-close.ts'
import { createRandom } from '#tests/support/random.ts'
import { difference, offsetUp, threeAmplifiers, twoAmplifiers } from '#tests/support/topologies.ts'

/*
 * Every board is compared with the dense solver, which stamps each board's elements anew and pivots on its own numbers:
 * the two share the stamps of the elements and nothing else.
 */

const networks: [string, Network][] = [
  ...Object.entries(sampleNetworks()),
  ['offset up, textbook', offsetUp(1e4, 1.8e5, 1e4, 2.7e4, 2.5, 0.1)],
  ['difference, textbook', difference([1e4, 1e5, 1e4, 1e5])],
  ['two amplifiers, textbook', twoAmplifiers(1e4, 9e4, 2e3)],
  ['three amplifiers, textbook', threeAmplifiers(1e4, 500, 1e4, 2e4)],
]

/** Common mode at which offsets are given in these tests, V. */
const REFERENCE = 1.1

/** Five percent of each value, and error sources larger than any part has. */
function effectsOf(element: NetworkElement, from: number): BoardEffect[] {
  const size = (port: BoardEffect['port']): number => {
    if (port === 'value') return Math.abs(kindOf(element).value(element) ?? 0) * 0.05 || 1e-3
    if (port === 'vos') return 5e-3
    if (port === 'cmrr') return 1e-3
    if (port === 'loopGain') return 5e-7
    return 1e-8
  }
  return portNames
    .filter((port) => kindOf(element).ports[port])
    .map((port, i) => ({ parameter: from + i, ref: element.ref, port, scale: size(port) }))
}

function everyEffect(network: Network): BoardEffect[] {
  const effects: BoardEffect[] = []
  for (const element of network.elements) effects.push(...effectsOf(element, effects.length))
  // One more parameter that moves everything together.
  return [...effects, ...effects.map((e) => ({ ...e, parameter: effects.length, scale: e.scale / 3 }))]
}

function drawAmounts(parameters: number, seed: number): Float64Array {
  const random = createRandom(seed)
  return Float64Array.from({ length: parameters * BLOCK }, () => 2 * random() - 1)
}

/** The same board put together for the dense solver. */
function solveAlone({ network, effects }: BoardCase, amounts: Float64Array, board: number, model: Model) {
  const extra = effects.map(({ ref, port, parameter, scale }): Injection => {
    const amount = scale * amounts[parameter * BLOCK + board]!
    return { ref, port, amount, ...(port === 'cmrr' ? { reference: REFERENCE } : {}) }
  })
  return solveDc(network, { model, extra })
}

const referencesOf = (network: Network) =>
  Object.fromEntries(network.elements.map(({ ref }) => [ref, REFERENCE]))

describe.each(networks)('boards of %s', (_, network) => {
  it.each(['real', 'ideal'] as const)('agree with the dense solver at every node, %s amplifiers', (model) => {
    const effects = everyEffect(network)
    const place = { network, effects }
    const solver = compileBoards([place], { model, references: referencesOf(network) })
    const amounts = drawAmounts(1 + Math.max(...effects.map((e) => e.parameter)), 7)
    solver.solve(amounts, BLOCK)
    solver.solve(amounts, BLOCK)
    const { nodes, branches } = indexUnknowns(network)
    for (let board = 0; board < BLOCK; board += 5) {
      const alone = solveAlone(place, amounts, board, model)
      for (const node of nodes) {
        const found = solver.voltages(0, node)[board] ?? NaN
        expectClose(found, alone.voltage(node), { absolute: 1e-11, relative: 1e-10 })
      }
      for (const ref of branches) {
        const found = solver.currents(0, ref)[board] ?? NaN
        expectClose(found, alone.current(ref), { absolute: 1e-13, relative: 1e-8 })
      }
    }
    expect(solver.fellBack).toBe(false)
  })
})

const divider = (signal: number, lower = 1e4): Network =>
  new Bench().v('VSENSE', 'sense', signal).r('R1', 'sense', 'adc', 1e4).r('R2', 'adc', '0', lower).build()

const resistors: BoardEffect[] = [
  { parameter: 0, ref: 'R1', port: 'value', scale: 100 },
  { parameter: 1, ref: 'R2', port: 'value', scale: 100 },
]

describe('compileBoards', () => {
  it('shares one elimination between cases that differ in their sources only', () => {
    const cases = [0, 1, 2.5].map((signal) => ({ network: divider(signal), effects: resistors }))
    const solver = compileBoards(cases, { model: 'real' })
    expect(solver.eliminations).toBe(1)
    const amounts = drawAmounts(2, 3)
    solver.solve(amounts, 40)
    cases.forEach((one, place) => {
      for (let board = 0; board < 40; board++)
        expectClose(
          solver.voltages(place, 'adc')[board] ?? NaN,
          solveAlone(one, amounts, board, 'real').output,
          { absolute: 1e-14 },
        )
    })
  })

  it('takes an elimination of its own for a case with another resistor, or with the same one varied otherwise', () => {
    const wider = resistors.map((e) => ({ ...e, scale: 2 * e.scale }))
    const cases = [
      { network: divider(1), effects: resistors },
      { network: divider(1, 2e4), effects: resistors },
      { network: divider(1), effects: wider },
    ]
    expect(compileBoards(cases, { model: 'real' }).eliminations).toBe(3)
  })

  it('gives each board the same answer wherever it stands in a block', () => {
    const network = sampleNetworks()['three amplifiers']!
    const effects = everyEffect(network)
    const parameters = 1 + Math.max(...effects.map((e) => e.parameter))
    const amounts = drawAmounts(parameters, 11)
    const shifted = new Float64Array(amounts.length)
    for (let p = 0; p < parameters; p++)
      for (let i = 0; i < 100; i++) shifted[p * BLOCK + i] = amounts[p * BLOCK + i + 100]!
    const solver = compileBoards([{ network, effects }], { model: 'real', references: referencesOf(network) })
    solver.solve(amounts, 200)
    const first = solver.voltages(0, 'adc').slice(100, 200)
    solver.solve(shifted, 100)
    expect([...solver.voltages(0, 'adc').slice(0, 100)]).toEqual([...first])
  })

  it('falls back to dense solutions where the fixed elimination does not agree with them', () => {
    // Node a stands on 3g − gain·g once x is eliminated: on these boards that pivot vanishes, though the circuit is sound.
    const network = new Bench()
      .v('VSENSE', 'sense', 1)
      .r('R1', 'sense', 'a', 1e4)
      .e('EX', 'x', '0', 'a', '0', 0)
      .r('R2', 'a', 'x', 1e4)
      .r('R3', 'a', 'adc', 1e4)
      .r('R4', 'adc', '0', 1e4)
      .build()
    const effects: BoardEffect[] = [{ parameter: 0, ref: 'EX', port: 'value', scale: 3 }]
    const solver = compileBoards([{ network, effects }], { model: 'real' })
    solver.solve(new Float64Array(BLOCK).fill(1), 10)
    expect(solver.fellBack).toBe(true)
    expectClose(solver.voltages(0, 'adc')[3] ?? NaN, -1, { absolute: 1e-12 })
    solver.solve(new Float64Array(BLOCK), 10)
    expectClose(solver.voltages(0, 'adc')[3] ?? NaN, 0.2, { absolute: 1e-12 })
  })

  it('keeps a resistor at a hundredth of its value where deviations would take more', () => {
    const effects: BoardEffect[] = [{ parameter: 0, ref: 'R1', port: 'value', scale: -2e4 }]
    const solver = compileBoards([{ network: divider(1.01), effects }], { model: 'real' })
    solver.solve(new Float64Array(BLOCK).fill(1), 1)
    expectClose(solver.voltages(0, 'adc')[0] ?? NaN, 1, { absolute: 1e-12 })
  })

  it('names what the network does not have, and what was not asked for', () => {
    const wrong: BoardEffect[] = [{ parameter: 0, ref: 'R7', port: 'value', scale: 1 }]
    expect(() => compileBoards([{ network: divider(1), effects: wrong }], { model: 'real' })).toThrow(
      'no element R7',
    )
    const port: BoardEffect[] = [{ parameter: 0, ref: 'R1', port: 'vos', scale: 1 }]
    expect(() => compileBoards([{ network: divider(1), effects: port }], { model: 'real' })).toThrow(
      'R1 has no vos',
    )
    const solver = compileBoards([{ network: divider(1), effects: resistors }], {
      model: 'real',
      watch: { nodes: ['adc'], branches: [] },
    })
    expect(() => solver.voltages(0, 'nowhere')).toThrow('no node nowhere')
    expect(() => solver.voltages(1, 'adc')).toThrow('no case 1')
  })

  it('says in circuit terms why a network has no operating point', () => {
    const floating = new Bench().v('VSENSE', 'sense', 1).c('C1', 'sense', 'adc', 1e-9).build()
    expect(() => compileBoards([{ network: floating, effects: [] }], { model: 'real' })).toThrow(
      'node adc has no dc path to ground',
    )
  })
})
