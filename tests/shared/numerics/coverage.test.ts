import { describe, expect, it } from 'vitest'
import {
  combinedDeviation,
  coverageInterval,
  cutFactor,
  normalCoverage,
  normalFactor,
  type Spread,
} from '#shared/numerics/coverage.ts'
import metrology from '#tests/fixtures/metrology-cases.json' with { type: 'json' }
import { expectClose } from '#tests/support/expect-close.ts'
import { createRandom } from '#tests/support/random.ts'

/* Published cases of the guide to uncertainty (fixture), closed forms, and drawn sums. */

const rectangular = (half: number): Spread => ({ kind: 'rectangular', half })
const normal = (deviation: number, cut = Infinity): Spread => ({ kind: 'normal', deviation, cut })
const four = (spread: Spread): Spread[] => [spread, spread, spread, spread]

const caseOf = (id: string) => {
  const found = metrology.cases.find((entry) => entry.id === id)
  if (!found) throw new Error(`there is no case ${id}`)
  return found
}

describe('the normal distribution', () => {
  it.each(metrology.coverageFactors.normal)('has k = $k for $pPct %', ({ pPct, k }) => {
    expectClose(normalFactor(pPct / 100), k, { absolute: 1e-6 })
    expectClose(normalCoverage(k), pPct / 100, { absolute: 1e-6 })
  })

  it('has the tail 1.973e-9 beyond ±6, from its continued fraction', () => {
    expectClose(1 - normalCoverage(6), 1.973175290075e-9, { relative: 1e-6 })
  })

  it('cut at three deviations keeps 0.98658 of its deviation, and all of it uncut', () => {
    // √(1 − 2·3·φ(3)/P(3)), φ(3) = 0.004431848412, P(3) = 0.997300203937
    expectClose(cutFactor(3), Math.sqrt(1 - (6 * 0.004431848412) / 0.997300203937), { relative: 1e-9 })
    expect(cutFactor(Infinity)).toBe(1)
  })
})

describe('the coverage interval of a sum', () => {
  it('of four standard normals is ±3.92, as published', () => {
    const { computed, published } = caseOf('sum-of-four-normals')
    const found = coverageInterval(four(normal(1)), 0.95)
    expectClose(found, computed.interval95?.[1] ?? NaN, { absolute: 1e-5 })
    expectClose(found, published.interval95?.[1] ?? NaN, { absolute: 0.005 })
    expectClose(combinedDeviation(four(normal(1))), published.u ?? NaN, { relative: 1e-12 })
  })

  it('of four rectangular quantities is ±3.88, as published, and not the ±3.92 of the normal', () => {
    const { computed, published } = caseOf('sum-of-four-rectangulars')
    const found = coverageInterval(four(rectangular(Math.sqrt(3))), 0.95)
    expectClose(found, computed.exact95?.[1] ?? NaN, { absolute: 2e-5 })
    expectClose(found, published.MCM95?.[1] ?? NaN, { absolute: 0.005 })
    expect(found).toBeLessThan((published.GUF95?.[1] ?? NaN) - 0.03)
    expectClose(combinedDeviation(four(rectangular(Math.sqrt(3)))), published.u ?? NaN, { relative: 1e-12 })
  })

  it.each([0.5, 0.9, 0.95, 0.99, 0.999])('of one rectangular quantity is that share of it (%d)', (p) => {
    expectClose(coverageInterval([rectangular(3)], p), 3 * p, { absolute: 3e-5 })
  })

  it.each([0.5, 0.95, 0.999])('of two equal ones has the triangle’s closed form (%d)', (p) => {
    expectClose(coverageInterval([rectangular(1), rectangular(1)], p), 2 * (1 - Math.sqrt(1 - p)), {
      absolute: 3e-5,
    })
  })

  it('of two unequal ones has the trapezium’s closed form', () => {
    // half-widths 3 and 1: beyond 2 the density falls as (4 − x)/12, so that the two tails hold (4 − x)²/12
    expectClose(coverageInterval([rectangular(3), rectangular(1)], 0.95), 4 - Math.sqrt(0.05 * 12), {
      absolute: 5e-5,
    })
  })

  it('of a normal cut at three deviations has the inner share of an uncut one', () => {
    const inner = normalFactor(0.95 * normalCoverage(3))
    expectClose(coverageInterval([normal(2, 3)], 0.95), 2 * inner, { absolute: 3e-4 })
  })

  it('counts many small terms as well as a few large ones', () => {
    const small = Array.from({ length: 40 }, () => rectangular(0.1))
    const expected = normalFactor(0.95) * combinedDeviation(small)
    expectClose(coverageInterval(small, 0.95), expected, { relative: 0.002 })
    // A large rectangular one with them: its edge rounded by what is as good as a normal.
    const rounded = coverageInterval([rectangular(10), ...small], 0.95)
    expectClose(rounded, coverageInterval([rectangular(10), normal(combinedDeviation(small))], 0.95), {
      relative: 1e-3,
    })
  })

  it('holds its share of drawn sums', () => {
    const random = createRandom(7)
    const halves = [5, 3, 1, 0.5]
    const interval = coverageInterval(halves.map(rectangular), 0.9)
    const draws = 40_000
    let inside = 0
    for (let n = 0; n < draws; n++) {
      const sum = halves.reduce((total, half) => total + half * (2 * random() - 1), 0)
      if (Math.abs(sum) <= interval) inside++
    }
    // four standard deviations of a share of 0.9
    expectClose(inside / draws, 0.9, { absolute: 4 * Math.sqrt((0.9 * 0.1) / draws) })
  })

  it('grows with the coverage asked for and never passes the sum of limits', () => {
    const random = createRandom(3)
    for (let n = 0; n < 60; n++) {
      const spreads = Array.from({ length: 1 + Math.floor(random() * 15) }, () =>
        random() < 0.5 ? rectangular(10 ** (3 * random())) : normal(10 ** (2 * random()), 3),
      )
      const limits = spreads.reduce((sum, s) => sum + (s.kind === 'normal' ? 3 * s.deviation : s.half), 0)
      const found = [0.5, 0.9, 0.99, 0.9999, 1].map((p) => coverageInterval(spreads, p))
      found.forEach((value, k) => {
        expect(value).toBeLessThanOrEqual(limits * (1 + 1e-12))
        expect(value).toBeGreaterThanOrEqual(found[k - 1] ?? 0)
      })
      expectClose(found[4] ?? NaN, limits, { relative: 1e-12 })
    }
  })

  it('of nothing is nothing', () => {
    expect(coverageInterval([], 0.95)).toBe(0)
    expect(coverageInterval([rectangular(0)], 0.95)).toBe(0)
    expect(coverageInterval([rectangular(1)], 0)).toBe(0)
  })
})

describe('combination of standard uncertainties', () => {
  it('gives the published uncertainty of an end-gauge calibration', () => {
    const { computed, published, inputs } = caseOf('end-gauge-calibration')
    const input = (name: string) => {
      const found = inputs?.find((i) => i.name === name) as { u: number; halfWidth?: number; x: number }
      return found
    }
    const length = input('ls').x
    // l = ls + d − ls·(da·theta + as·dtheta): sensitivities −ls·theta to da, −ls·as to dtheta, nothing to as and theta
    const expansion = rectangular((input('da').halfWidth ?? NaN) * length * Math.abs(input('theta mean').x))
    const difference = rectangular((input('dtheta').halfWidth ?? NaN) * length * input('as').x)
    const comparison = ['d (observations)', 'd (comparator random)', 'd (comparator systematic)'].map(
      (name) => normal(input(name).u),
    )
    expectClose(combinedDeviation(comparison), computed.u_d ?? NaN, { relative: 1e-6 })
    expectClose(combinedDeviation([expansion]), computed.contribution_da ?? NaN, { relative: 1e-6 })
    expectClose(combinedDeviation([difference]), computed.contribution_dtheta ?? NaN, { relative: 1e-6 })
    const all = combinedDeviation([normal(input('ls').u), ...comparison, expansion, difference])
    expectClose(all, computed.uc ?? NaN, { relative: 1e-6 })
    expectClose(all, published.uc ?? NaN, { absolute: 0.5 })
  })

  it('gives the published first-order interval of a mass calibration', () => {
    const { computed, published } = caseOf('mass-calibration-first-order')
    // The densities do not act to first order: rho_a stands at rho_a0.
    const spreads = [normal(0.05), normal(0.02)]
    const u = combinedDeviation(spreads)
    expectClose(u, computed.GUF1?.u ?? NaN, { relative: 1e-8 })
    expectClose(u, published.GUF1?.u ?? NaN, { absolute: 5e-5 })
    const half = coverageInterval(spreads, 0.95)
    const [low, high] = published.GUF1?.interval95 ?? []
    expectClose(1.234 - half, low ?? NaN, { absolute: 1e-4 })
    expectClose(1.234 + half, high ?? NaN, { absolute: 1e-4 })
  })
})
