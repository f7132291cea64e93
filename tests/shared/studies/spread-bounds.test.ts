import { describe, expect, it } from 'vitest'
import { BLOCK, compileBoards, type BoardEffect } from '#shared/analysis/board-solver.ts'
import { assess } from '#shared/budget/assess.ts'
import { factorOf } from '#shared/budget/error-input.ts'
import { errorInputs } from '#shared/budget/error-inputs.ts'
import { buildChain } from '#shared/design/chain.ts'
import type { DesignDocument } from '#shared/design/schema.ts'
import { kindOf } from '#shared/network/elements/index.ts'
import { createStreams } from '#shared/numerics/random.ts'
import { difference } from '#tests/support/topologies.ts'
import { arrangementDesigns } from '#tests/support/designs.ts'
import { expectClose } from '#tests/support/expect-close.ts'
import { buildTrial, parseDesign } from '#tests/support/trials.ts'

/** Figures that make every kind of error count. */
const coarse = (document: DesignDocument): DesignDocument => ({
  ...document,
  sensor: { ...document.sensor, accuracy: { zero: 0.002, span: 0.003, linearity: 0.001, ageing: 1e-3 } },
  converter: { ...document.converter, inputCurrent: 1e-7 },
  rails: { ...document.rails, ripple: 0.01 },
  parts: {
    resistors: { tolerance: 0.02, drift: 1e-4, ageing: 1e-3 },
    amplifier: { vos: 2e-3, ib: 0, ios: 1e-9, cmrr: 80, psrr: 70 },
  },
})

/** A rejection multiplies the volts at the inputs: what the bounds leave out is of second order in it, V. */
const SECOND_ORDER = 1e-9 + 10 * 1e-4 ** 2

/**
 * No part of the bounds: open-loop gain and a reference's output resistance, which are typical figures, and self-heating. The budget takes a bias current as ± its
 * limit about nominal, which is wider than the bounds' "from none to all of it": it is left out here by `ib` of 0.
 */
const BESIDE = /\.(loopGain|selfHeating|loading)$/

const designs = arrangementDesigns.filter(([id]) =>
  [
    'level-shift',
    'non-inverting-up',
    'inverting-up',
    'weighted-difference',
    'difference',
    'two-amplifier',
    'three-amplifier',
    'integrated-instrumentation',
    'non-inverting+non-inverting-up',
  ].includes(id),
)

describe.each(designs)('boards of %s', (id, document) => {
  const design = parseDesign(coarse(document))
  const { spec } = buildTrial(design, id)
  const bounds = assess(design, spec, 'with-clips')

  it.each(['low', 'high'] as const)('never leave the exact bounds of a pin at the %s end', (place) => {
    const chain = buildChain(design, spec, design.sensor.quantity[place])
    const { temperature, calibration } = design
    const inputs = errorInputs(design, chain, null).filter((input) => !BESIDE.test(input.id))
    const values = new Map(chain.network.elements.map((e) => [e.ref, kindOf(e).value(e) ?? 0]))
    const cases = [temperature.low, temperature.high].map((t) => {
      const condition = { temperature: t, sensorTemperature: t, years: calibration.interval }
      const effects = inputs.flatMap((input, parameter): BoardEffect[] =>
        input.effects.map(({ ref, port, scale, relative }) => {
          const own = relative ? (values.get(ref) ?? 0) : 1
          return { parameter, ref, port, scale: scale * own * factorOf(input, condition) }
        }),
      )
      return { network: chain.network, effects }
    })
    const solver = compileBoards(cases, {
      model: 'real',
      references: Object.fromEntries(chain.errors.map((e) => [e.ref, e.reference])),
    })
    const streams = createStreams(4, inputs.length)
    const amounts = new Float64Array(inputs.length * BLOCK)
    for (let turn = 0; turn < 16; turn++) {
      streams.forEach((stream, p) => stream.fillRectangular(amounts, p * BLOCK, BLOCK))
      // Half of the boards stand at their limits, where the bounds are reached.
      for (let i = 0; i < amounts.length; i++)
        amounts[i] =
          (turn % 2 === 0 ? Math.sign(amounts[i]!) : amounts[i]!) * inputs[Math.floor(i / BLOCK)]!.limit
      solver.solve(amounts, BLOCK)
      cases.forEach((_, c) => {
        chain.pins.forEach((pin, i) => {
          const reached = bounds.pins[i]?.reached[place]
          const volts = solver.voltages(c, pin.node)
          expect(Math.min(...volts)).toBeGreaterThanOrEqual((reached?.low ?? NaN) - SECOND_ORDER)
          expect(Math.max(...volts)).toBeLessThanOrEqual((reached?.high ?? NaN) + SECOND_ORDER)
        })
      })
    }
    expect(solver.fellBack).toBe(false)
  })
})

describe('common-mode rejection of a difference amplifier of gain one, four rectangular resistors of 1 %', () => {
  // Derived, not published: worst case (1 + G)/(4·0.01) = 34.0 dB, first percentile 37.0 dB, median 47.9 dB.
  const BOARDS = 100 * BLOCK
  const network = difference([1e4, 1e4, 1e4, 1e4])
  const drive = (a: number, b: number) => ({
    ...network,
    elements: network.elements.map((e) =>
      e.kind === 'voltage-source' ? { ...e, value: e.ref === 'V1' ? a : b } : e,
    ),
  })
  const effects = ['R1', 'R2', 'R3', 'R4'].map((ref, parameter): BoardEffect => ({
    parameter,
    ref,
    port: 'value',
    scale: 100,
  }))
  const solver = compileBoards(
    [
      { network: drive(1, 1), effects },
      { network: drive(-0.5, 0.5), effects },
    ],
    { model: 'ideal' },
  )
  const decibels = new Float64Array(BOARDS)
  const streams = createStreams(1, 4)
  const amounts = new Float64Array(4 * BLOCK)
  for (let start = 0; start < BOARDS; start += BLOCK) {
    streams.forEach((stream, p) => stream.fillRectangular(amounts, p * BLOCK, BLOCK))
    solver.solve(amounts, BLOCK)
    const [common, differential] = [solver.voltages(0, 'adc'), solver.voltages(1, 'adc')]
    for (let i = 0; i < BLOCK; i++)
      decibels[start + i] = 20 * Math.log10(Math.abs(differential[i]! / common[i]!))
  }
  decibels.sort()
  const at = (share: number) => decibels[Math.floor(share * BOARDS)] ?? NaN

  it('has its first percentile at 37.0 dB and its median at 47.9 dB', () => {
    expectClose(at(0.01), 37, { absolute: 0.15 })
    expectClose(at(0.5), 47.9, { absolute: 0.15 })
  })

  it('is never worse than 34.0 dB', () => {
    expect(decibels[0]).toBeGreaterThan(33.97)
    expect(decibels[0]).toBeLessThan(36)
  })
})
