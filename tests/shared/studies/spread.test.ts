import { beforeAll, describe, expect, it } from 'vitest'
import type { DesignDocument } from '#shared/design/schema.ts'
import type { Prepared } from '#shared/design/plan-design.ts'
import { runSpread, spreadSteps } from '#shared/studies/spread.ts'
import type { Spread } from '#shared/studies/types.ts'
import { buildConverter, buildDesign, buildDifferentialSensor, buildSensor } from '#tests/support/designs.ts'
import { expectClose } from '#tests/support/expect-close.ts'
import { buildRatioDesign, prepareChosen } from '#tests/support/spreads.ts'

const BOARDS = 100_000
/** For chains with every kind of error. */
const MANY = 40_000

/** Standard errors by which a sampled figure may miss: one in two million does. */
const ERRORS = 5

/** Share of the boards of a histogram below each inner edge. */
function sharesBelow({ histogram }: Spread): [number, number][] {
  const all = histogram.counts.reduce((sum, count) => sum + count, 0)
  let below = 0
  return histogram.counts.slice(0, -1).map((count, i) => {
    below += count
    return [histogram.edges[i + 1] ?? NaN, below / all]
  })
}

describe('a divider of two rectangular resistors', () => {
  const tolerance = 0.05
  const high = 4
  const prepared = prepareChosen(
    buildRatioDesign('attenuator', {
      output: { low: 0.5, high },
      values: { R1: 1e4, R2: 1e4 },
      tolerance,
      target: 0.1,
    }),
  )
  const spread = runSpread(prepared, { boards: BOARDS, seed: 3 })

  /**
   * P(R1/R2 ≤ z·(nominal ratio)), both rectangular over 1 ± t: for z ≤ 1 the area of the square where a ≤ z·b, which is
   * ∫ from (1−t)/z to 1+t of z·b − (1−t) over db, divided by (2t)²; for z > 1 one less the same at 1/z.
   */
  const ratioBelow = (z: number): number => {
    if (z > 1) return 1 - ratioBelow(1 / z)
    const [least, most] = [1 - tolerance, 1 + tolerance]
    if (z <= least / most) return 0
    return ((z * most ** 2) / 2 - least * most + least ** 2 / (2 * z)) / (2 * tolerance) ** 2
  }

  /** y = high/(1 + z) and y = quantity/2 nominal, so error = 2·high/(1 + z) − high falls as z rises. */
  const errorBelow = (error: number): number => 1 - ratioBelow((2 * high) / (error + high) - 1)

  it('has the exact distribution at every edge of the histogram', () => {
    expect(spread.at.quantity).toBe(high)
    for (const [edge, share] of sharesBelow(spread)) {
      const exact = errorBelow(edge)
      const error = Math.sqrt((exact * (1 - exact)) / BOARDS)
      expectClose(share, exact, { absolute: ERRORS * error + 1 / BOARDS })
    }
  })

  it('has the exact quantiles', () => {
    expect(spread.quantiles.map(([share]) => share)).toEqual([
      0.001, 0.025, 0.05, 0.25, 0.5, 0.75, 0.95, 0.975, 0.999,
    ])
    for (const [share, error] of spread.quantiles)
      expectClose(errorBelow(error), share, { absolute: ERRORS * Math.sqrt((share * (1 - share)) / BOARDS) })
  })

  it('has the exact yield, within its own interval and five standard errors', () => {
    // The error grows with the voltage, so that the high end decides.
    const exact = errorBelow(0.1) - errorBelow(-0.1)
    expectClose(spread.yield?.share ?? NaN, exact, {
      absolute: ERRORS * Math.sqrt((exact * (1 - exact)) / BOARDS),
    })
    expect(spread.yield?.interval.low).toBeLessThan(exact)
    expect(spread.yield?.interval.high).toBeGreaterThan(exact)
  })
})

describe('published spreads', () => {
  // Derived, not published: standard deviation of the ratio from 400 000 boards of another program.
  const relative = (document: DesignDocument, full: number) =>
    runSpread(prepareChosen(document), { boards: BOARDS, seed: 1 }).deviation / full

  it.each([
    ['rectangular', 0.00408296893, 0.005],
    ['normal', 0.002354865269, 0.01],
  ] as const)('divider-of-equal-resistors, %s', (distribution, expected, closeness) => {
    const output = { low: 0.5, high: 4 }
    const values = { R1: 1e4, R2: 1e4 }
    const document = buildRatioDesign('attenuator', { output, values, tolerance: 0.01, distribution })
    // A cut at three deviations takes 1.35 % from the standard deviation of a normal part.
    const cut = distribution === 'normal' ? 0.98651 : 1
    expectClose(relative(document, 4), expected * cut, { relative: closeness })
  })

  it('gain-of-10-non-inverting', () => {
    const output = { low: 0.05, high: 0.4 }
    const document = buildRatioDesign('non-inverting', {
      output,
      values: { Rg: 1e3, Rf: 9e3, R1: 9e3, R2: 1e3 },
      tolerance: 0.01,
    })
    expectClose(relative(document, 0.4), 0.007364903226, { relative: 0.005 })
  })
})

/** Every kind of error, with small figures: first order is then nearly exact. */
const small = (state: 'asBuilt' | 'zeroed' | 'calibrated', more: Partial<DesignDocument> = {}) =>
  buildDesign({
    sensor: buildSensor(-0.35, 0.35, {
      accuracy: { zero: 1e-3, span: 1e-3, linearity: 3e-4, zeroDrift: 1e-5, spanDrift: 1e-5, ageing: 2e-4 },
    }),
    converter: buildConverter({
      bits: 16,
      offsetError: 2e-4,
      gainError: 3e-4,
      offsetDrift: 1e-6,
      gainDrift: 1e-6,
      inl: 2,
    }),
    parts: { resistors: { tolerance: 1e-3, drift: 1e-5, ageing: 1e-4 } },
    calibration: { points: [-2, 2], standardUncertainty: 1e-4, interval: 2 },
    target: { limit: 0.004, per: 'span', state },
    ...more,
  })

const differential = (state: 'asBuilt' | 'calibrated') =>
  small(state, {
    sensor: buildDifferentialSensor(-0.02, 0.03, { low: 1, high: 4 }),
    rails: { positive: 5, negative: -5, tolerance: 0.02 },
    choose: { arrangement: 'three-amplifier' },
  })

const bridge = small('calibrated', {
  sensor: {
    kind: 'bridge',
    quantity: { name: 'Water level', unit: 'm', low: 0, high: 5 },
    excitation: { same: 'converter', resistance: 1 },
    sensitivity: 0.002,
    bridgeResistance: 1000,
    zeroBalance: 2e-5,
    sensitivityTolerance: 1e-3,
    temperature: { low: 0, high: 30 },
  },
  calibration: { points: [0, 5], standardUncertainty: 1e-4 },
  rails: { positive: 5, negative: -5, tolerance: 0.02 },
})

const normal = small('zeroed', { analysis: { distribution: 'normal' } })

describe.each([
  ['as built', small('asBuilt')],
  ['zeroed', small('zeroed')],
  ['calibrated', small('calibrated')],
  ['zeroed, normal parts', normal],
  ['differential, as built', differential('asBuilt')],
  ['differential, calibrated', differential('calibrated')],
  ['ratiometric bridge', bridge],
])('a chain with small errors, %s', (_, document) => {
  let prepared: Prepared
  let spread: Spread
  beforeAll(() => {
    prepared = prepareChosen(document)
    spread = runSpread(prepared, { boards: MANY, seed: 1 })
  })

  it('has the standard deviation of the first-order budget, and its mean', () => {
    const { deviation, difference } = spread.budget
    // One in two million runs misses by more than 5/√(2n); second order adds little.
    expectClose(spread.deviation, deviation, { relative: ERRORS / Math.sqrt(2 * MANY) + 0.005 })
    expectClose(difference, (spread.deviation / deviation - 1) * 100, { absolute: 1e-9 })
    expectClose(spread.mean, 0, { absolute: 0.03 * deviation })
  })

  it('is told at the worst point of the budget and compared with its figures there', () => {
    const { budget } = prepared.candidate
    const total = budget?.totals[spread.state]
    expect(spread.at).toEqual({ quantity: total?.at, temperature: total?.temperature })
    const per = budget?.perQuantity ?? NaN
    expectClose(spread.budget.deviation, (total?.standard ?? NaN) / per, { relative: 0.02 })
    expect(spread.worst.high).toBeLessThanOrEqual(((total?.worst ?? NaN) / per) * (1 + 1e-9))
  })

  it('keeps every board inside the sum of limits and clips none', () => {
    const [, least] = spread.quantiles[0] ?? []
    expect(spread.histogram.edges[0]).toBeLessThanOrEqual(least ?? NaN)
    expect(spread.histogram.edges[0]).toBeGreaterThan(1.01 * spread.worst.low)
    expect(spread.histogram.edges.at(-1)).toBeLessThan(1.01 * spread.worst.high)
    expect(spread.clipped).toBe(0)
  })

  it('has about the expanded uncertainty of the budget as its interval of 95 %', () => {
    const { budget } = prepared.candidate
    const expanded = (budget?.totals[spread.state].expanded ?? NaN) / (budget?.perQuantity ?? NaN)
    const at = (share: number) => spread.quantiles.find(([s]) => s === share)?.[1] ?? NaN
    expectClose((at(0.975) - at(0.025)) / 2, expanded, { relative: 0.04 })
  })
})

describe('runSpread', () => {
  const prepared = prepareChosen(small('calibrated'))

  it('gives the same figures for the same seed and others for another', () => {
    const first = runSpread(prepared, { boards: 3000, seed: 7 })
    expect(runSpread(prepared, { boards: 3000, seed: 7 })).toEqual(first)
    expect(runSpread(prepared, { boards: 3000, seed: 8 }).mean).not.toBe(first.mean)
    expect(first.histogram.counts.reduce((sum, n) => sum + n, 0)).toBe(3000)
  })

  it('takes boards and seed from the design', () => {
    const spread = runSpread(prepareChosen(small('calibrated', { analysis: { boards: 700, seed: 12 } })))
    expect(spread).toMatchObject({ boards: 700, wanted: 700, seed: 12, finished: true })
    expect(spread).toEqual(runSpread(prepared, { boards: 700, seed: 12 }))
  })

  it('builds the same first boards however many are wanted', () => {
    const few = runSpread(prepared, { boards: 300, seed: 7 })
    const many = runSpread(prepared, { boards: 5000, seed: 7 })
    expect(few.builds).toHaveLength(40)
    expect(many.builds).toEqual(few.builds)
  })

  it('stopped, has the figures of as many boards as were built', () => {
    const steps = spreadSteps(prepared, { boards: 50_000, seed: 5 })
    steps.next()
    const second = steps.next()
    const { value, done } = steps.next(true)
    expect(done).toBe(true)
    const { boards } = value
    expect(boards).toBe(second.value.boards)
    expect(boards).toBeLessThan(50_000)
    expect(value).toEqual({ ...runSpread(prepared, { boards, seed: 5 }), wanted: 50_000, finished: false })
  })

  it('stops where the one who watches says so, and otherwise tells a growing number of boards', () => {
    const seen: number[] = []
    const whole = runSpread(prepared, { boards: 20_000, onProgress: ({ boards }) => void seen.push(boards) })
    expect(whole.finished).toBe(true)
    expect(seen.length).toBeGreaterThan(2)
    expect([...seen].sort((a, b) => a - b)).toEqual(seen)
    const part = runSpread(prepared, { boards: 20_000, onProgress: () => false })
    expect(part).toMatchObject({ boards: seen[0], wanted: 20_000, finished: false })
  })

  it('has no yield without a target', () => {
    const document = small('calibrated')
    delete document.target
    const spread = runSpread(prepareChosen(document), { boards: 200 })
    expect(spread.yield).toBeNull()
    expect(spread.state).toBe('calibrated')
  })

  it('refuses numbers of boards and seeds out of range, in words', () => {
    for (const boards of [99, 1_000_001, 200.5, NaN])
      expect(() => runSpread(prepared, { boards })).toThrow('whole number from 100 to 1000000')
    expect(() => runSpread(prepared, { seed: -1 })).toThrow('seed is -1')
    const bare = { ...prepared, candidate: { ...prepared.candidate } }
    delete bare.candidate.budget
    expect(() => runSpread(bare)).toThrow('has no error budget')
  })

  it('stays plain data', () => {
    const spread = runSpread(prepared, { boards: 500 })
    expect(JSON.parse(JSON.stringify(spread))).toEqual(spread)
  })
})

describe('boards that clip', () => {
  /** A divider whose output may leave a converter of 0 to 2 V: R2/R1 then exceeds one. */
  const clipping = (high: number) => {
    const document = buildRatioDesign('attenuator', {
      output: { low: 0.5, high: 4 },
      values: { R1: 1e4, R2: 1e4 },
      tolerance: 0.05,
    })
    return prepareChosen({ ...document, converter: { ...document.converter, input: { low: 0, high } } })
  }

  it('are counted, left out of the figures and outside the target', () => {
    const spread = runSpread(clipping(2), { boards: 40_000, seed: 2 })
    // One half by symmetry: y = 4/(1 + R1/R2) exceeds 2 V where R2 > R1.
    expectClose(spread.clipped / 40_000, 0.5, { absolute: ERRORS * Math.sqrt(0.25 / 40_000) })
    expect(spread.histogram.counts.reduce((sum, n) => sum + n, 0)).toBe(40_000 - spread.clipped)
    expect(spread.yield?.inside).toBe(40_000 - spread.clipped)
    const { counts, edges } = spread.histogram
    expect(counts.filter((count, i) => count > 0 && edges[i]! > 1e-3)).toEqual([])
  })

  it('fall into bins of a whole number of codes, half a code beside the readings', () => {
    const spread = runSpread(clipping(2.2), { boards: 20_000 })
    const { edges, counts } = spread.histogram
    const width = edges[1]! - edges[0]!
    expect(counts.length).toBeGreaterThanOrEqual(20)
    expect(counts.length).toBeLessThanOrEqual(61)
    edges.slice(1).forEach((edge, i) => expectClose(edge - edges[i]!, width, { relative: 1e-9 }))
  })

  it('may be all of them: no figure is then made up', () => {
    const spread = runSpread(clipping(1.8), { boards: 2000 })
    expect(spread).toMatchObject({ clipped: 2000, mean: 0, deviation: 0, quantiles: [], builds: [] })
    expect(spread.yield).toMatchObject({ inside: 0, share: 0 })
    expect(JSON.parse(JSON.stringify(spread))).toEqual(spread)
  })

  it('do not occur where every board has room', () => {
    expect(runSpread(clipping(2.2), { boards: 20_000 }).clipped).toBe(0)
  })

  it('count at an amplifier as well, with the current that its swing costs', () => {
    // 2.95 V are left at the output; the divider reaches 2.1 V only with the last 0.0x V lost per milliampere.
    const document = buildRatioDesign('non-inverting', {
      output: { low: 0.5, high: 2 },
      values: { Rg: 1e3, Rf: 1e3, R1: 1e3, R2: 1e3 },
      tolerance: 0.05,
    })
    const prepare = (outputResistanceHigh: number) =>
      prepareChosen({
        ...document,
        rails: { positive: 5.5, negative: -5 },
        parts: {
          ...document.parts,
          amplifier: { ...document.parts?.amplifier, outputLow: 0.1, outputHigh: 0.1, outputResistanceHigh },
        },
      })
    expect(runSpread(prepare(0), { boards: 10_000 }).clipped).toBe(0)
    // 4 V across 2 kΩ draw 2 mA: 700 Ω leave 4 V, which half of the boards exceed.
    const spread = runSpread(prepare(700), { boards: 10_000 })
    expect(spread.clipped).toBeGreaterThan(3000)
    expect(spread.clipped).toBeLessThan(7000)
  })
})
