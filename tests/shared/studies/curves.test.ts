import { describe, expect, it } from 'vitest'
import { computeDynamics } from '#shared/budget/dynamics.ts'
import { describeFilter } from '#shared/budget/filter-plan.ts'
import { summariseNoise } from '#shared/budget/noise.ts'
import { checkStability } from '#shared/budget/stability.ts'
import type { ChainSpec } from '#shared/design/chain.ts'
import type { Design } from '#shared/design/schema.ts'
import { computeCurves } from '#shared/studies/curves.ts'
import type { Curve, Curves } from '#shared/studies/types.ts'
import { arrangementDesigns, buildConverter, buildDesign, buildSensor } from '#tests/support/designs.ts'
import { expectClose } from '#tests/support/expect-close.ts'
import { buildTrial, parseDesign } from '#tests/support/trials.ts'

interface Prepared {
  design: Design
  spec: ChainSpec
  curves: Curves
}

function prepare(id: string, document = arrangementDesigns.find(([name]) => name === id)?.[1]): Prepared {
  const design = parseDesign(document)
  const { spec } = buildTrial(design, id)
  return { design, spec, curves: computeCurves(design, spec) }
}

/** y at x, straight between the points on a logarithmic axis. */
function at(curve: Pick<Curve, 'x' | 'y'>, x: number): number {
  const i = Math.max(
    1,
    curve.x.findIndex((value) => value >= x),
  )
  const share = Math.log(x / curve.x[i - 1]!) / Math.log(curve.x[i]! / curve.x[i - 1]!)
  return curve.y[i - 1]! + share * (curve.y[i]! - curve.y[i - 1]!)
}

const chains = [
  'direct',
  'non-inverting-up',
  'three-amplifier',
  'integrated-instrumentation+weighted-difference',
]

describe.each(chains)('curves of %s', (id) => {
  const { design, spec, curves } = prepare(id)
  const { bode, step, loops, noise } = curves
  const dynamics = computeDynamics(design, spec)

  it('hold at most 200 numbers a line, and numbers only', () => {
    const lines = [
      bode.frequency,
      bode.magnitude,
      bode.phase,
      ...(bode.band ? [bode.band.low, bode.band.high] : []),
      step.time,
      step.output,
      ...loops.flatMap((l) => [l.frequency, l.magnitude, l.phase]),
      noise.frequency,
      noise.total,
      ...noise.parts.flatMap((p) => [p.x, p.y]),
    ]
    for (const line of lines) {
      expect(line.length).toBeGreaterThan(50)
      expect(line.length).toBeLessThanOrEqual(200)
      expect(line.every(Number.isFinite)).toBe(true)
    }
  })

  it('fall by 3 dB where the bandwidth is, inside the band of the tolerances', () => {
    const x = bode.frequency
    expectClose(bode.magnitude[0]!, 0, { absolute: 1e-3 })
    expectClose(at({ x, y: bode.magnitude }, dynamics.bandwidth ?? NaN), -3.01, { absolute: 0.03 })
    const { low, high } = bode.band ?? { low: [], high: [] }
    bode.magnitude.forEach((level, i) => {
      expect(low[i]).toBeLessThanOrEqual(level + 1e-9)
      expect(high[i]).toBeGreaterThanOrEqual(level - 1e-9)
    })
    // 0.1 % of resistor and 5 % of capacitor, and their drifts, well above the corner
    const wide = at({ x, y: high }, 30 * dynamics.bandwidth!) - at({ x, y: low }, 30 * dynamics.bandwidth!)
    expectClose(wide, 20 * Math.log10(1.054 / 0.946), { relative: 0.1 })
  })

  it('step from one end of the span to the other and settle in time', () => {
    expect(step.time[0]).toBe(0)
    const last = step.output.at(-1)!
    expect(Math.abs(last - step.final)).toBeLessThanOrEqual(step.band)
    const outside = step.output.findLastIndex((value) => Math.abs(value - step.final) > step.band)
    expectClose(step.time[outside]!, dynamics.settling ?? NaN, { relative: 0.01 })
  })

  it('cross one where stability found it', () => {
    const entries = checkStability(design, spec)
    expect(loops.map((l) => l.amplifier)).toEqual(entries.map((e) => e.amplifier))
    for (const loop of loops) {
      const entry = entries.find((e) => e.amplifier === loop.amplifier)
      const x = loop.frequency
      expectClose(at({ x, y: loop.magnitude }, entry?.crossover ?? NaN), 0, { absolute: 0.05 })
      expectClose(180 + at({ x, y: loop.phase }, entry?.crossover ?? NaN), entry?.phaseMargin ?? NaN, {
        absolute: 0.5,
      })
    }
  })

  it('hold the noise that the summary integrates, its largest sources first', () => {
    const { circuit, lines, from, to } = summariseNoise(design, spec)
    const references = lines.filter((l) => l.id.endsWith('Reference')).reduce((sum, l) => sum + l.rms ** 2, 0)
    let square = 0
    for (let i = 1; i < noise.frequency.length; i++) {
      const [f0, f1] = [noise.frequency[i - 1]!, noise.frequency[i]!]
      square += ((f0 * noise.total[i - 1]! ** 2 + f1 * noise.total[i]! ** 2) / 2) * Math.log(f1 / f0)
    }
    expectClose(Math.sqrt(square), Math.sqrt(circuit ** 2 - references), { relative: 0.02 })
    expect([noise.frequency[0], noise.frequency.at(-1)]).toEqual([from, expect.closeTo(to, 0)])
    expect(noise.parts[0]?.name).toBe(
      lines.find((l) => !['converter', 'quantisation'].includes(l.id) && !l.id.endsWith('Reference'))?.label,
    )
  })
})

describe('the band of a filter', () => {
  describe.each([
    ['rc', 1],
    ['sallen-key', 2],
    ['sallen-key', 5],
    ['multiple-feedback', 4],
  ] as const)('of kind %s and order %i', (kind, order) => {
    // a corner far below what the stage before does by itself
    const document = buildDesign({ choose: { filter: { kind, order, corner: 500 } } })
    const { design, spec, curves } = prepare('non-inverting-up', document)
    const { frequency: x, band } = curves.bode
    const { low, high } = band ?? { low: [], high: [] }
    const { band: figures } = describeFilter(design, spec)

    it('falls by 3 dB where the figures say that the corner may lie', () => {
      expect(figures.corner.high / figures.corner.low).toBeGreaterThan(1.1)
      expectClose(at({ x, y: low }, figures.corner.low), -3.01, { absolute: 0.15 })
      expectClose(at({ x, y: high }, figures.corner.high), -3.01, { absolute: 0.15 })
    })

    it('has the attenuation of the figures where they state one', () => {
      const reached = { low: -at({ x, y: high }, 980), high: -at({ x, y: low }, 980) }
      expectClose(reached.low, figures.reached?.low ?? NaN, { absolute: 0.1 })
      expectClose(reached.high, figures.reached?.high ?? NaN, { absolute: 0.1 })
    })
  })

  it('is absent where its parts are exact', () => {
    const exact = { tolerance: 0, drift: 0, ageing: 0 }
    const document = buildDesign({
      parts: { resistors: exact, capacitors: { tolerance: 0, drift: 0 } },
      choose: { filter: { kind: 'sallen-key', order: 2, corner: 500 } },
    })
    expect(prepare('non-inverting-up', document).curves.bode.band).toBeNull()
  })

  it('is absent where the chain has none', () => {
    const document = buildDesign({
      sensor: buildSensor(0.2, 2.2),
      converter: buildConverter(),
      choose: { filter: { kind: 'none' } },
    })
    expect(prepare('follower', document).curves.bode.band).toBeNull()
  })
})
