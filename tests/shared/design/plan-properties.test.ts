import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { hashOf } from '#shared/design/canonical.ts'
import { toCode } from '#shared/design/codes.ts'
import { planDesign } from '#shared/design/plan-design.ts'
import type { Plan } from '#shared/design/plan.ts'
import { readDesign } from '#shared/design/read.ts'
import {
  fullDesigns,
  leavesOf,
  soundDesigns,
  valueAt,
  valueFor,
  withLeaf,
  withValue,
  type Json,
} from '#tests/support/random-designs.ts'
import { createRandom } from '#tests/support/random.ts'
import { unlabelled, type Leaf } from '#tests/support/schema-leaves.ts'
import { parseDesign } from '#tests/support/trials.ts'

const kinds = Object.entries(soundDesigns)

/** Every plain value of a tree, by its path. */
function valuesOf(tree: unknown, path = ''): [string, unknown][] {
  if (typeof tree !== 'object' || tree === null) return [[path, tree]]
  return Object.entries(tree).flatMap(([key, value]) => valuesOf(value, path === '' ? key : `${path}.${key}`))
}

/** The same object with the keys of every level in another order. */
function shuffled(tree: unknown, random: () => number): unknown {
  if (Array.isArray(tree)) return tree.map((value) => shuffled(value, random))
  if (typeof tree !== 'object' || tree === null) return tree
  const keys = Object.keys(tree).map((key): [number, string] => [random(), key])
  keys.sort(([a], [b]) => a - b)
  return Object.fromEntries(keys.map(([, key]) => [key, shuffled((tree as Json)[key], random)]))
}

const reread = <T>(value: T): T => JSON.parse(JSON.stringify(value)) as T

/** Paths at which a plan holds something that is no figure, no text and no branch, or a figure of too many digits. */
function oddValues(plan: Plan): string[] {
  const mayBeNull = [
    /(^chosen|clipsAt\.(low|high)|ClipsAt\.(low|high)|\.group|\.gain|Bandwidth(Lsb)?|AtHalfSampleRate|atHalfSampleRate|holdsTo|clampLimit|clampCurrent|\.path)$/,
    /\.stability\.\d+\.(crossover|phaseMargin|worst)$/,
    /\.budget\.(target|improvements\.\d+\.(needed|part))$/,
    /\.dynamics\.(bandwidth|settling|fullPower|overshoot)$/,
    /\.drive\.(needed|available|average|settled|largestSource|multiplexed|multiplexed\.(needed|met)|criteria\.\d+\.(needed|met))$/,
    /\.filter\.(alias|floor|digital|mains|alias\.rateFor|alias\.orders\.\w+|band\.(droop|reached)|digital\.droop)$/,
    /\.filter\.sections\.\d+\.(real|(wanted|values|real)\.q)$/,
  ]
  return valuesOf(plan).flatMap(([path, value]) => {
    if (typeof value === 'number') {
      if (!Number.isFinite(value)) return [`${path} is ${value}`]
      return Number(value.toPrecision(12)) === value ? [] : [`${path} has too many digits: ${value}`]
    }
    if (value === null) return mayBeNull.some((known) => known.test(path)) ? [] : [`${path} is null`]
    return value === undefined ? [`${path} is undefined`] : []
  })
}

describe('a random valid design', () => {
  const arbitrary = (name: keyof typeof soundDesigns) =>
    fc
      .tuple(fc.integer({ min: 0, max: 2 ** 30 }), fc.integer({ min: 1, max: 5 }))
      .map(([seed, changes]) => randomDesign(soundDesigns[name], seed, changes))

  it.each([
    ['single-ended', 120],
    ['differential', 25],
    ['bridge', 25],
  ] as const)(
    'is planned without an exception, and its plan holds finite figures of at most 12 digits only (%s)',
    (name, runs) => {
      let planned = 0
      fc.assert(
        fc.property(arbitrary(name), (document) => {
          if (!readDesign(document).ok) return
          planned++
          const plan = planDesign(document)
          expect(oddValues(plan)).toEqual([])
          for (const candidate of plan.candidates) {
            expect(candidate.feasible).toBe(candidate.reasons.length === 0)
            for (const reason of candidate.reasons)
              expect(reason.text).not.toMatch(/NaN|Infinity|undefined|null/)
          }
        }),
        { seed: 4711, numRuns: runs },
      )
      expect(planned).toBeGreaterThan(runs / 3)
    },
    60_000,
  )
})

function randomDesign(sound: Json, seed: number, changes: number): Json {
  const random = createRandom(seed)
  const leaves = leavesOf(sound).filter((leaf) => !leaf.path.includes('format'))
  let document = sound
  for (let n = 0; n < changes; n++) {
    const leaf = leaves[Math.floor(random() * leaves.length)]
    if (!leaf) continue
    const changed = withLeaf(document, leaf, valueFor(leaf, random))
    // A change that the reader refuses is left out, so that the rest of them is still tried.
    if (readDesign(changed).ok) document = changed
  }
  return document
}

describe('planning twice', () => {
  it.each(kinds)('gives the same plan, saved and read again, keys in any order (%s)', (_, sound) => {
    const plan = planDesign(sound)
    expect(reread(plan)).toEqual(plan)
    const again = planDesign(shuffled(reread(reread(sound)), createRandom(7)))
    expect(JSON.stringify(again)).toBe(JSON.stringify(plan))
  })

  it('keeps the hash of a design whatever the order of its keys, and changes it with any value', () => {
    const sound = soundDesigns['single-ended']
    const hash = hashOf(sound)
    expect(hash).toMatch(/^[0-9a-f]{64}$/)
    for (let seed = 1; seed <= 20; seed++) expect(hashOf(shuffled(sound, createRandom(seed)))).toBe(hash)
    expect(hashOf({ ...sound, name: 'other' })).not.toBe(hash)
  })
})

describe.each(Object.entries(fullDesigns))('every key of a %s design', (_, full) => {
  const cases = leavesOf(full).map((leaf): [string, Leaf] => [leaf.path.join('.'), leaf])
  const before = valuesOf(parseDesign(full))

  it.each(cases)('%s can be set, survives saving, and changes nothing else', (path, leaf) => {
    const changed = acceptedChange(full, leaf)
    expect(changed, `no value of ${path} was accepted`).not.toBeNull()
    const value = valueAt(changed, leaf.path)
    const saved = reread(changed)
    expect(saved).toEqual(changed)
    const after = valuesOf(parseDesign(saved))
    const own = ([at]: [string, unknown]) => at === path || at.startsWith(`${path}.`)
    expect(after.filter((entry) => !own(entry))).toEqual(before.filter((entry) => !own(entry)))
    expect(after.filter(own)).toEqual(valuesOf(value, path))
  })
})

/** The document with the leaf at another value that the reader accepts; null where none was found. */
function acceptedChange(full: Json, leaf: Leaf): Json | null {
  const random = createRandom(leaf.path.join('.').length)
  const now = valueAt(full, leaf.path)
  const near = typeof now === 'number' ? [now * 1.1, now * 0.9, now + 1] : []
  const options = [...near, ...Array.from({ length: 60 }, () => valueFor(leaf, random)), now]
  for (const value of options) {
    const changed = withValue(full, leaf.path, value)
    if (readDesign(changed).ok) return changed
  }
  return null
}

describe('the code of a voltage', () => {
  const converter = fc.record({
    input: fc
      .tuple(fc.double({ min: -10, max: 10, noNaN: true }), fc.double({ min: 0.1, max: 20, noNaN: true }))
      .map(([low, span]) => ({ low, high: low + span })),
    bits: fc.integer({ min: 4, max: 32 }),
    coding: fc.constantFrom('straight' as const, 'offset' as const, 'twos' as const),
  })
  const ends = (c: { bits: number; coding: string }) =>
    c.coding === 'twos' ? [-(2 ** (c.bits - 1)), 2 ** (c.bits - 1) - 1] : [0, 2 ** c.bits - 1]

  it('stays within the codes of the converter whatever the voltage', () => {
    fc.assert(
      fc.property(converter, fc.double({ min: -1e6, max: 1e6, noNaN: true }), (c, y) => {
        const [least = 0, most = 0] = ends(c)
        const code = toCode(c, y)
        expect(Number.isInteger(code) && code >= least && code <= most).toBe(true)
      }),
      { seed: 1 },
    )
  })

  it('is the first one at the bottom of the range, and the last one at the top and beyond', () => {
    fc.assert(
      fc.property(converter, (c) => {
        const span = c.input.high - c.input.low
        expect([toCode(c, c.input.low), toCode(c, c.input.high)]).toEqual(ends(c))
        expect([toCode(c, c.input.low - span), toCode(c, c.input.high + span)]).toEqual(ends(c))
      }),
      { seed: 2 },
    )
  })

  it('never falls while the voltage rises', () => {
    fc.assert(
      fc.property(
        converter,
        fc.array(fc.double({ min: -30, max: 30, noNaN: true }), { minLength: 2 }),
        (c, list) => {
          const codes = list.sort((a, b) => a - b).map((y) => toCode(c, y))
          expect(codes).toEqual([...codes].sort((a, b) => a - b))
        },
      ),
      { seed: 3 },
    )
  })

  it('rounds to the nearest step: half a step up is the next code', () => {
    const c = { input: { low: 0, high: 4.096 }, bits: 12, coding: 'straight' as const }
    expect([0.0004, 0.0005, 0.0014, 0.0015].map((y) => toCode(c, y))).toEqual([0, 1, 1, 2])
  })
})

it('names label, unit and accepted range of every number but those on a list that may only shrink', () => {
  expect(unlabelled()).toEqual(['parts.amplifier.typical.*', 'calibration.points[]'])
})
