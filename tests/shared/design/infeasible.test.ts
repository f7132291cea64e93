import { describe, expect, it } from 'vitest'
import { planDesign } from '#shared/design/plan-design.ts'
import type { Candidate, Reason } from '#shared/design/plan.ts'
import type { DesignDocument } from '#shared/design/schema.ts'
import { buildConverter, buildDesign, buildDifferentialSensor, buildSensor } from '#tests/support/designs.ts'
import { expectClose } from '#tests/support/expect-close.ts'

/* What physics or the rails forbid is a result: a code, its numbers, and a sentence that a person can act on. */

const quick = { resistors: { series: 'E12', tolerance: 0.001 } } as const

const single = (low: number, high: number, more: Partial<DesignDocument> = {}): DesignDocument =>
  buildDesign({ sensor: buildSensor(low, high), parts: quick, ...more })

const twoWires = (low: number, high: number, more: Partial<DesignDocument> = {}): DesignDocument =>
  buildDesign({ sensor: buildDifferentialSensor(low, high), parts: { resistors: { series: 'E6' } }, ...more })

const noReference = buildConverter()
delete noReference.reference

/** [arrangement, code, design, words of the sentence, numbers that stand behind it] */
type Row = [string, string, DesignDocument, RegExp, Record<string, number>]

const refused: Row[] = [
  ['direct', 'unity-outside', single(-0.35, 0.35), /needs gain or offset/, { low: -0.35, high: 0.35 }],
  ['follower', 'unity-outside', single(0, 9), /needs gain or offset/, { low: 0, high: 9 }],
  ['attenuator', 'no-attenuation', single(-1, 9), /without an offset/, {}],
  ['level-shift', 'offset-down', single(8, 16), /only shifts up/, { offset: -2.35 }],
  ['level-shift', 'sum-above-one', single(-0.35, 0.35), /amplifier with gain/, { sum: 2.4 / 0.7 + 0.5 }],
  [
    'level-shift',
    'no-reference',
    single(-10, 10, { converter: noReference }),
    /needs a reference voltage/,
    {},
  ],
  ['non-inverting', 'no-gain-lands', single(-0.35, 0.35), /No gain above 1/, { offset: 1.25 }],
  ['non-inverting-up', 'sum-below-one', single(-10, 10), /attenuating level shift/, { sum: 2.4 / 20 + 0.5 }],
  ['non-inverting-up', 'offset-down', single(0.5, 1), /only shifts up/, { offset: -2.35 }],
  ['non-inverting-down', 'offset-up', single(-0.35, 0.35), /only shifts down/, { offset: 1.25 }],
  ['non-inverting-down', 'gain-below-one', single(8, 16), /needs more than 1/, { gain: 0.3 }],
  [
    'non-inverting-down',
    'offset-too-large',
    single(2, 3),
    /weighted difference or a higher reference/,
    { offset: -4.75, most: -2.5 * 1.4 },
  ],
  ['weighted-difference', 'offset-up', single(-0.35, 0.35), /only shifts down/, { offset: 1.25 }],
  [
    'weighted-difference',
    'offset-too-small',
    single(0.5, 1),
    /non-inverting amplifier with offset down/,
    { offset: -2.35, least: 2.5 * 3.8 },
  ],
  ['inverting', 'no-gain-lands', single(-0.35, 0.35), /No negative gain/, { offset: 1.25 }],
  ['inverting-up', 'offset-down', single(-3, -2), /only shifts up/, { offset: 2.45 - 2.4 * 3 }],
  [
    'inverting-up',
    'offset-too-large',
    single(8, 16),
    /higher reference/,
    { offset: 2.45 + 0.3 * 8, most: 2.5 * 1.3 },
  ],
  ['inverting-down', 'offset-up', single(-0.35, 0.35), /only shifts down/, { offset: 1.25 }],
  [
    'non-inverting-up',
    'supply-low',
    single(-0.1, 0.1, { rails: { positive: 1.5 } }),
    /needs at least 1.8 V/,
    { supply: 1.5, minimum: 1.8 },
  ],
  [
    'non-inverting-up',
    'supply-high',
    single(-0.35, 0.35, { rails: { positive: 24, negative: -24 } }),
    /takes at most 36 V/,
    { supply: 48, maximum: 36 },
  ],
  [
    'integrated-instrumentation',
    'outside-window',
    twoWires(-0.02, 0.02, { parts: { resistors: { stock: [1e6] }, instrumentation: { gainMinimum: 10 } } }),
    /the one value in stock/,
    {},
  ],
  [
    'difference',
    'level-outside',
    twoWires(0.02, 0.03),
    /more than 0 V and less than 2.5 V/,
    { reference: 2.5 },
  ],
  ['difference-grounded', 'level-misses', twoWires(-0.02, 0.02), /reference leg at 0 V/, { level: 0 }],
  [
    'difference-at-reference',
    'level-misses',
    twoWires(-0.02, 0.02),
    /reference leg at 2.5 V/,
    { level: 2.5 },
  ],
  ['two-amplifier', 'gain-range', twoWires(-1.5, 1.5), /The gain is 0\.8;/, { gain: 0.8 }],
  ['integrated-instrumentation', 'gain-range', twoWires(-1e-4, 1e-4), /The gain is 12 000;/, { gain: 12000 }],
  [
    'integrated-instrumentation',
    'supply-low',
    twoWires(-0.02, 0.02, { rails: { positive: 2.5 } }),
    /needs at least 2.7 V/,
    { supply: 2.5, minimum: 2.7 },
  ],
]

const clipped: Row[] = [
  [
    'follower',
    'swing-low',
    single(0, 2, { converter: buildConverter({ guard: { low: 0, high: 0 } }) }),
    /Needs a negative rail: U1 output/,
    { limit: 0.02 },
  ],
  [
    'non-inverting-up',
    'swing-high',
    single(-0.35, 0.35, { rails: { positive: 2.4 } }),
    /higher positive rail/,
    { limit: 2.38 },
  ],
  [
    'follower',
    'input-high',
    single(0.2, 2.2, { rails: { positive: 3 }, parts: { ...quick, amplifier: { inputHigh: 1.2 } } }),
    /higher positive rail.*U1 \+ input/,
    { limit: 1.8 },
  ],
  [
    'non-inverting-down',
    'input-low',
    single(0.5, 1, { parts: { ...quick, amplifier: { inputLow: 0.7 } } }),
    /negative rail.*U1 \+ input/,
    { limit: 0.7 },
  ],
  [
    'integrated-instrumentation',
    'internal-high',
    twoWires(-0.02, 0.02, { sensor: buildDifferentialSensor(-0.02, 0.02, { low: 3.4, high: 3.6 }) }),
    /U1 internal node/,
    { limit: 4.1 },
  ],
  [
    'direct',
    'converter-low',
    single(0.001, 2, {
      sensor: buildSensor(0.001, 2, { accuracy: { zero: 0.01 } }),
      converter: buildConverter({ guard: { low: 0, high: 0 } }),
    }),
    /wider guard band/,
    { limit: 0 },
  ],
  [
    'direct',
    'converter-high',
    single(0.1, 2.499, {
      sensor: buildSensor(0.1, 2.499, { accuracy: { span: 0.01 } }),
      converter: buildConverter({ guard: { low: 0, high: 0 } }),
    }),
    /worst board leaves its range by/,
    { limit: 2.5 },
  ],
  [
    'level-shift',
    'reference-source',
    single(-10, 10, {
      converter: buildConverter({ reference: { voltage: 2.5, source: 1e-9 } }),
    }),
    /The reference would have to give/,
    {},
  ],
  [
    'non-inverting-up',
    'reference-sink',
    single(0, 2, {
      converter: buildConverter({ input: { low: 0, high: 5 }, guard: { low: 0.05, high: 0.05 } }),
      shiftReference: { voltage: 1 },
      rails: { positive: 6 },
    }),
    /The shift reference would have to take .* it takes 0 A/,
    {},
  ],
]

describe.each([
  ['does not exist', refused],
  ['exists but clips or overloads', clipped],
])('an arrangement that %s', (_, rows) => {
  it.each(rows)('%s: says %s with its numbers', (id, code, document, words, numbers) => {
    const { candidate, reason } = reasonOf(document, id, code)
    expect(candidate.feasible).toBe(false)
    expect(plain(reason.text)).toMatch(words)
    expect(reason.text).toMatch(/[.!]$/)
    for (const [name, value] of Object.entries(numbers))
      expectClose(reason.numbers[name] ?? NaN, value, { relative: 1e-6, absolute: 1e-9 })
  })
})

/** Sentences keep number and unit together with spaces that do not break; patterns are typed with plain ones. */
const plain = (text: string): string => text.replace(/[\u00a0\u202f\u2009]/g, ' ')

function reasonOf(
  document: DesignDocument,
  id: string,
  code: string,
): { candidate: Candidate; reason: Reason } {
  const plan = planDesign(document)
  const candidate = plan.candidates.find((c) => c.arrangement === id)
  const reason = candidate?.reasons.find((r) => r.code === code)
  if (!candidate || !reason)
    throw new Error(`${id} gives ${JSON.stringify(candidate?.reasons ?? 'no candidate')}`)
  return { candidate, reason }
}

describe('a source that floats', () => {
  const sensor = { ...buildDifferentialSensor(-0.02, 0.03), floating: true }
  const plan = planDesign(twoWires(-0.02, 0.03, { sensor, rails: { positive: 5, negative: -5 } }))

  it('needs a bias return at inputs that draw their bias through it', () => {
    for (const id of ['two-amplifier', 'three-amplifier', 'integrated-instrumentation'])
      expect(plan.candidates.find((c) => c.arrangement === id)?.reasons.map((r) => r.code)).toEqual([
        'bias-return',
      ])
  })

  it('is held by the resistors of a difference amplifier', () => {
    const difference = plan.candidates.find((c) => c.arrangement === 'difference')
    expect(difference?.reasons.map((r) => r.code)).not.toContain('bias-return')
  })
})

describe('nothing that is feasible', () => {
  const plan = planDesign(single(-0.35, 0.35, { rails: { positive: 1 } }))

  it('leaves the choice empty, and every candidate with its reasons', () => {
    expect(plan.chosen).toBeNull()
    expect(plan.candidates.length).toBeGreaterThan(5)
    for (const candidate of plan.candidates) {
      expect(candidate.feasible).toBe(false)
      expect(candidate.reasons.length).toBeGreaterThan(0)
      expect(candidate.components).toBeUndefined()
    }
  })

  it('still says what is required', () => {
    expectClose(plan.required.gain, 2.4 / 0.7, { relative: 1e-9 })
    expectClose(plan.required.offset, 1.25, { relative: 1e-9 })
  })
})

it('a differential converter is said to be beyond these arrangements, one and all', () => {
  const plan = planDesign(single(-0.35, 0.35, { converter: buildConverter({ wiring: 'differential' }) }))
  expect(plan.chosen).toBeNull()
  expect(new Set(plan.candidates.flatMap((c) => c.reasons.map((r) => r.code)))).toEqual(
    new Set(['differential-converter']),
  )
})

it('candidates stand in the order feasible, clipping, impossible', () => {
  const converter = buildConverter()
  delete converter.guard
  const plan = planDesign(single(0, 1, { converter }))
  const rank = plan.candidates.map((c) => (c.feasible ? 0 : c.ranking ? 1 : 2))
  expect(rank).toEqual([...rank].sort())
  expect(new Set(rank)).toEqual(new Set([0, 1, 2]))
})
