import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { targetFor } from '#shared/design/settle.ts'
import { buildConverter, buildDesign, buildSensor } from '#tests/support/designs.ts'
import { expectClose } from '#tests/support/expect-close.ts'
import { planChosen } from '#tests/support/plans.ts'
import { parseDesign } from '#tests/support/trials.ts'

/* Readings beyond the span have to stay distinguishable: the target shrinks until their images fit as well. */

describe('the target with readings beyond the span', () => {
  const share = fc.double({ min: 0, max: 1.5, noNaN: true })
  const guard = fc.record({
    low: fc.double({ min: 0, max: 0.2, noNaN: true }),
    high: fc.double({ min: 0, max: 0.2, noNaN: true }),
  })
  const design = parseDesign(buildDesign({ converter: buildConverter({ input: { low: -1, high: 4 } }) }))
  const range = 5

  it('is the largest with which target and readings fit: no room is left at either end', () => {
    fc.assert(
      fc.property(guard, share, share, fc.boolean(), (g, below, above, crossed) => {
        const signal = { low: 1, high: 3 }
        const beyond = { low: 1 - 2 * below, high: 3 + 2 * above }
        const { low, high } = targetFor(design, g, { low: 0, high: 0 }, signal, beyond, crossed)
        const size = high - low
        const [under, over] = crossed ? [above, below] : [below, above]
        // Room at each end: of the target inside its guard bands, of the readings inside the range.
        const below0 = Math.min(low - (-1 + g.low * range), low - under * size - -1)
        const above1 = Math.min(4 - g.high * range - high, 4 - (high + over * size))
        // None is left at either end: a larger target would leave one of them.
        expectClose(below0, 0, { absolute: 1e-9 })
        expectClose(above1, 0, { absolute: 1e-9 })
      }),
      { seed: 11 },
    )
  })

  it('is the guarded range itself without them', () => {
    const target = targetFor(design, { low: 0.1, high: 0.2 }, { low: 0, high: 0 }, { low: 0, high: 1 }, null)
    expectClose(target.low, -0.5, { absolute: 1e-12 })
    expectClose(target.high, 3, { absolute: 1e-12 })
  })
})

describe.each([
  ['non-inverting-up', -1, 1, { low: -1.5, high: 1.05 }],
  ['non-inverting-up', -1, 1, { low: -1.05, high: 1.5 }],
  ['non-inverting-up', 1, -1, { low: 1.5, high: -1.05 }],
  ['inverting-up', -1, 1, { low: -1.5, high: 1.05 }],
  ['inverting-up', -1, 1, { low: -1.05, high: 1.5 }],
])('%s for %f … %f V with readings at %o', (arrangement, low, high, beyond) => {
  const chosen = planChosen(
    buildDesign({
      sensor: buildSensor(low, high, { beyond }),
      converter: buildConverter({ guard: { low: 0.05, high: 0.05 } }),
      rails: { positive: 5, negative: -5 },
      choose: { arrangement },
    }),
  )

  it('is feasible, and keeps the readings inside the converter’s range on every board', () => {
    expect(chosen.reasons).toEqual([])
    const { gain, offset } = chosen.realised
    for (const s of [beyond.low, beyond.high]) {
      expect(gain * s + offset).toBeGreaterThan(0)
      expect(gain * s + offset).toBeLessThan(2.5)
    }
  })

  it('gives up no more of the range than the readings ask for', () => {
    const { gain, offset } = chosen.realised
    const images = [low, high, beyond.low, beyond.high].map((s) => gain * s + offset)
    const left = Math.min(Math.min(...images), 2.5 - Math.max(...images))
    expect(left).toBeLessThan(0.03)
  })
})
