import { describe, expect, it } from 'vitest'
import { solveDc } from '#shared/analysis/dc.ts'
import { assess, type Place } from '#shared/budget/assess.ts'
import { buildChain } from '#shared/design/chain.ts'
import { planDesign } from '#shared/design/plan-design.ts'
import { toCode } from '#shared/design/codes.ts'
import type { DesignDocument } from '#shared/design/schema.ts'
import { buildBoard, type Draw } from '#tests/support/boards.ts'
import { buildConverter, buildDesign, buildDifferentialSensor, buildSensor } from '#tests/support/designs.ts'
import { expectClose } from '#tests/support/expect-close.ts'
import { chosenOf, planChosen, valueOf } from '#tests/support/plans.ts'
import { createRandom } from '#tests/support/random.ts'
import { buildTrial, parseDesign } from '#tests/support/trials.ts'

/* Chains with filter sections behind their stages: where their ends land, and what every board does. */

type Filter = NonNullable<NonNullable<DesignDocument['choose']>['filter']>

const filters: Filter[] = [
  { kind: 'sallen-key', order: 2, corner: 300 },
  { kind: 'sallen-key', response: 'bessel', order: 5, corner: 300 },
  { kind: 'multiple-feedback', order: 2, corner: 300 },
  { kind: 'multiple-feedback', response: 'chebyshev', order: 3, corner: 300 },
  { kind: 'multiple-feedback', order: 4, corner: 300 },
]

// No guard is stated: the plan finds the one that the worst board needs.
const freeConverter = () => {
  const converter = buildConverter()
  delete converter.guard
  return converter
}

const converter = freeConverter()
// Small resistors: the amplifiers' input capacitances turn no phase.
const parts = { resistors: { preferred: 2000, maximum: 50_000 } }
const signals: [string, DesignDocument][] = [
  ['a bipolar signal', buildDesign({ converter, parts })],
  [
    'a signal that falls, with readings beyond its span',
    buildDesign({ converter, parts, sensor: buildSensor(1.2, 0.2, { beyond: { low: 1.25, high: 0.1 } }) }),
  ],
  ['a signal that fits as it is', buildDesign({ converter, parts, sensor: buildSensor(0.2, 2.2) })],
  [
    'a differential signal',
    buildDesign({
      converter,
      sensor: buildDifferentialSensor(-0.02, 0.03),
      rails: { positive: 5, negative: -5, tolerance: 0.02 },
      parts: { resistors: { ...parts.resistors, series: 'E24' } },
    }),
  ],
]

const withFilter = (document: DesignDocument, filter: Filter, more: object = {}): DesignDocument => ({
  ...document,
  choose: { ...document.choose, filter, ...more },
})

describe.each(signals)('%s', (name, document) => {
  const own = name === 'a differential signal' ? filters.slice(1, 3) : filters
  describe.each(own.map((filter) => [`${filter.kind} filter of order ${filter.order}`, filter] as const))(
    'before a %s',
    (_, filter) => {
      const plan = planDesign(withFilter(document, filter))
      const chosen = chosenOf(plan)
      const design = parseDesign(withFilter(document, filter, { arrangement: chosen.arrangement }))
      const { spec } = buildTrial(design, chosen.arrangement)
      const { quantity } = design.sensor
      const { low, high } = chosen.realised.converter
      const inverts = filter.kind === 'multiple-feedback' && Math.floor((filter.order ?? 2) / 2) % 2 === 1

      it('lands where it aims, its ends as near as the values of the stages come', () => {
        const { target, picks, pick } = chosen
        const span = target.high - target.low
        // The stages' own pick says how far off they are; a thousandth is left to bias and loop gain.
        const near = ((picks[pick]?.error ?? 0) + 1e-3) * span
        expect(Math.abs(chosen.realised.endpointError.low)).toBeLessThan(near)
        expect(Math.abs(chosen.realised.endpointError.high)).toBeLessThan(near)
        expect(Math.min(low, high)).toBeGreaterThan(target.low - near)
        expect(Math.max(low, high)).toBeLessThan(target.high + near)
        const { codes } = chosen.realised
        expect([codes.low, codes.high]).toEqual([
          toCode(design.converter, low),
          toCode(design.converter, high),
        ])
      })

      it('is turned over by an odd number of sections that invert, and shown so at each of them', () => {
        const sections = chosen.levels.filter(({ node }) => /^F\d$/.test(node))
        expect(sections.length).toBe(Math.floor((filter.order ?? 2) / 2))
        expect(chosen.levels.at(-1)?.node).toBe('adc')
        for (const { gain } of sections)
          expectClose(gain ?? NaN, filter.kind === 'sallen-key' ? 1 : -1, { relative: 1e-3 })
        const [first, last] = [quantity.low, quantity.high].map((q) => {
          const chain = buildChain(design, spec, q)
          const solution = solveDc(chain.network, { model: 'real' })
          return { before: solution.voltage(chain.following[0]?.node ?? ''), after: solution.output }
        })
        if (!first || !last) throw new Error('two ends')
        expectClose((last.after - first.after) / (last.before - first.before), inverts ? -1 : 1, {
          relative: 1e-3,
        })
      })

      it('keeps every drawn board inside the reported bounds, and those inside the regions', () => {
        const bounds = assess(design, spec, 'with-clips')
        expect(chosen.headroom.filter(({ margin }) => Math.min(margin.low, margin.high) < -1e-4)).toEqual([])
        const random = createRandom(filter.order ?? 2)
        const escapes: string[] = []
        const places: [Place, number][] = [
          ['low', quantity.low],
          ['high', quantity.high],
        ]
        for (const [place, q] of places) {
          const chain = buildChain(design, spec, q)
          for (let n = 0; n < 60; n++) {
            const { solution } = buildBoard(design, chain, q, drawer(random, n % 2 === 0))
            chain.pins.forEach((pin, i) => {
              const reached = bounds.pins[i]?.reached[place]
              const volts = solution.voltage(pin.node)
              if (!(volts >= (reached?.low ?? NaN) - 1e-7 && volts <= (reached?.high ?? NaN) + 1e-7))
                escapes.push(`${pin.name}: ${volts}`)
            })
          }
        }
        expect(escapes).toEqual([])
      })
    },
  )
})

/** Each part at a corner of its limits, or anywhere between. */
function drawer(random: () => number, corner: boolean): Draw {
  const drawn = new Map<string, number>()
  return (name) => {
    if (!drawn.has(name)) drawn.set(name, corner ? (random() < 0.5 ? -1 : 1) : 2 * random() - 1)
    return drawn.get(name) ?? 0
  }
}

describe('a chain with a filter', () => {
  it('is planned the same without one as before there were any: R9 and C9 alone', () => {
    const chosen = planChosen(buildDesign())
    expect(chosen.filter.kind).toBe('rc')
    expect(chosen.components.filter(({ stage }) => /^F\d$/.test(stage))).toEqual([])
  })

  it('lists the parts of its sections, with what they are for and what the equations ask for', () => {
    const chosen = planChosen(
      buildDesign({ choose: { filter: { kind: 'multiple-feedback', order: 4, corner: 300 } } }),
    )
    const of = (stage: string) => chosen.components.filter((c) => c.stage === stage)
    expect(of('F1').map(({ ref }) => ref)).toEqual([
      'R10',
      'R11',
      'C10',
      'R21',
      'R23',
      'R22',
      'C21',
      'C22',
      'U2',
    ])
    expect(of('F2').map(({ ref }) => ref)).toEqual(['R31', 'R33', 'R32', 'C31', 'C32', 'U3'])
    expect(of('F2').map(({ sets }) => sets)).toEqual(Array.from({ length: 6 }, () => 'Filter, section 2'))
    const found = of('F2').find(({ ref }) => ref === 'R32')
    expectClose(found?.wanted ?? NaN, found?.value ?? NaN, { relative: 0.05 })
  })

  it('obeys each value that is fixed', () => {
    const values = { R21: 12_000, R32: 4700, C22: 3.3e-9, R10: 22_000, R9: 330, C9: 2.2e-9 }
    const chosen = planChosen(
      buildDesign({
        converter: freeConverter(),
        choose: { filter: { kind: 'multiple-feedback', order: 4, corner: 500 }, values },
      }),
    )
    for (const [ref, value] of Object.entries(values)) {
      expect(valueOf(chosen, ref)).toBe(value)
      expect(chosen.components.find((c) => c.ref === ref)?.chosen).toBe(true)
    }
    expect(chosen.findings.map(({ code }) => code)).not.toContain('unused-value')
  })

  it('says why its filter cannot be built', () => {
    const bare = buildConverter()
    delete bare.reference
    const plan = planDesign(
      buildDesign({
        converter: bare,
        sensor: buildSensor(0.1, 0.4),
        choose: { filter: { kind: 'multiple-feedback', corner: 300 } },
      }),
    )
    expect(plan.chosen).toBeNull()
    const codes = new Set(plan.candidates.flatMap(({ reasons }) => reasons.map(({ code }) => code)))
    expect([...codes]).toEqual(['filter-level'])
  })

  it('wants a follower before sections that would load the source', () => {
    const document = (sourceResistance: number) =>
      buildDesign({
        converter: freeConverter(),
        sensor: buildSensor(0.3, 2.1, { sourceResistance }),
        choose: { filter: { kind: 'multiple-feedback', order: 2, corner: 300 } },
      })
    const reasonsFor = (ohms: number) =>
      planDesign(document(ohms)).candidates.find(({ arrangement }) => arrangement === 'direct')?.reasons
    expect(reasonsFor(100)?.map(({ code }) => code)).toEqual(['filter-loads-source'])
    expect(reasonsFor(0)).toEqual([])
  })

  it('leaves out signals that a follower of its sections cannot take', () => {
    const plan = planDesign(
      buildDesign({
        converter: buildConverter({ input: { low: 0, high: 4.8 }, reference: { voltage: 4.8 } }),
        parts: { amplifier: { inputHigh: 1.2 } },
        sensor: buildSensor(-1, -0.1),
        choose: { arrangement: 'inverting', filter: { kind: 'sallen-key', order: 2, corner: 300 } },
      }),
    )
    const inverting = plan.candidates.find(({ arrangement }) => arrangement === 'inverting')
    expect(inverting?.reasons.map(({ code }) => code)).toContain('input-high')
    expect(inverting?.reasons.find(({ code }) => code === 'input-high')?.text).toContain('U2 + input')
  })
})
