import { describe, expect, it } from 'vitest'
import { solveAc } from '#shared/analysis/ac.ts'
import { solveDc } from '#shared/analysis/dc.ts'
import { toSpice } from '#shared/analysis/spice.ts'
import { addFilter } from '#shared/filters/build-filter.ts'
import { responses, sectionsGain, prototypeSections } from '#shared/filters/prototypes.ts'
import { sizeFilter } from '#shared/filters/size-filter.ts'
import { NetworkBuilder } from '#shared/network/builder.ts'
import type { Network } from '#shared/network/types.ts'
import { divideComplex, magnitude, subtractComplex } from '#shared/numerics/complex.ts'
import { buildDesign } from '#tests/support/designs.ts'
import { expectClose } from '#tests/support/expect-close.ts'
import { runAc } from '#tests/support/ngspice.ts'
import { parseDesign } from '#tests/support/trials.ts'

const CORNER = 2000

/** A filter by itself between an ideal source and the converter. */
function filterNetwork(
  kind: 'sallen-key' | 'multiple-feedback',
  response: (typeof responses)[number],
  order: number,
): Network {
  const design = parseDesign(
    buildDesign({
      choose: { filter: { kind, response, order, corner: CORNER } },
      parts: { resistors: { series: 'E192' } },
    }),
  )
  const builder = new NetworkBuilder()
  builder.voltageSource({ ref: 'VPOS', p: 'vpos', n: '0', value: 5, stage: 'supply' })
  builder.voltageSource({ ref: 'VNEG', p: 'vneg', n: '0', value: 0, stage: 'supply' })
  builder.voltageSource({ ref: 'VREF', p: 'vref', n: '0', value: 2.5, stage: 'supply' })
  builder.resistor({ ref: 'RREFLOAD', a: 'vref', b: '0', value: 1e6, stage: 'supply' })
  builder.voltageSource({ ref: 'VSENSE', p: 'in', n: '0', value: 1, ac: 1, stage: 'source' })
  const spec = sizeFilter(design, { voltage: 2.5, resistance: 0 })
  expect(spec.refusals).toEqual([])
  addFilter(builder, { amplifiers: 0 }, design, spec, 'in')
  builder.resistor({ ref: 'RADC', a: 'adc', b: '0', value: 1e12, stage: 'converter' })
  return builder.build({
    title: `${kind} ${response} ${order}`,
    output: { p: 'adc', n: '0' },
    temperature: 23,
  })
}

const every = (['sallen-key', 'multiple-feedback'] as const).flatMap((kind) =>
  responses.flatMap((response) => [2, 3, 4, 5, 6].map((order) => [kind, response, order] as const)),
)

describe.each(every)('the %s filter, %s of order %i', (kind, response, order) => {
  const network = filterNetwork(kind, response, order)

  it('has in ngspice the response that the engine finds', async () => {
    const spice = await runAc(
      toSpice(network, { analysis: { ac: { pointsPerDecade: 7, from: 20, to: 2e7 } } }),
    )
    const found = spice.nodes.adc
    expect(spice.frequency.length).toBeGreaterThan(40)
    spice.frequency.forEach((frequency, i) => {
      const ours = solveAc(network, frequency, { model: 'real' }).output
      const theirs = { re: found?.[i]?.re ?? NaN, im: found?.[i]?.im ?? NaN }
      // 1e-14 V: what is left of a volt in double precision.
      const away = magnitude(subtractComplex(ours, theirs))
      expect(away).toBeLessThanOrEqual(1e-3 * magnitude(theirs) + 1e-14)
    })
  })

  it('has with ideal amplifiers the response of its prototype, as near as standard values come', () => {
    const sections = prototypeSections(response, order)
    const [still] = [magnitude(solveAc(network, 0, { model: 'ideal' }).output)]
    expectClose(still, 1, { relative: 1e-6 })
    for (const ratio of [0.1, 0.5, 0.8, 1, 1.5, 3]) {
      const gain = magnitude(solveAc(network, ratio * CORNER, { model: 'ideal' }).output) / still
      // Each section within 1 % of f0 and Q, the drive of an even order at twenty times the corner.
      expectClose(gain, sectionsGain(sections, ratio), { relative: 0.012 * order })
    }
  })

  it('turns the signal over once for each section that inverts, about its level', () => {
    const inverts = kind === 'multiple-feedback' && Math.floor(order / 2) % 2 === 1
    const at = (value: number) => solveDc(network, { model: 'ideal', set: { VSENSE: value } }).output
    expectClose(at(2) - at(1), inverts ? -1 : 1, { relative: 1e-6 })
    // The level is in the middle of the range of 0 to 2.5 V.
    expectClose(at(1.25), 1.25, { relative: 1e-3 })
  })
})

describe('the phase of a section', () => {
  it('lags by 90° at f0 with an ideal amplifier, where its gain is Q', () => {
    const network = filterNetwork('sallen-key', 'chebyshev', 4)
    const [a, b] = [prototypeSections('chebyshev', 4)[0], prototypeSections('chebyshev', 4)[1]]
    for (const [section, from, to] of [
      [a, 'in', 'F1'],
      [b, 'F1', 'F2'],
    ] as const) {
      const solution = solveAc(network, (section?.f0 ?? NaN) * CORNER, { model: 'ideal' })
      const ratio = divideComplex(solution.voltage(to), solution.voltage(from))
      expectClose(-ratio.im, section?.q ?? NaN, { relative: 0.02 })
      expectClose(ratio.re, 0, { absolute: 0.04 })
    }
  })
})
