import { describe, expect, it } from 'vitest'
import type { Level } from '#shared/design/plan.ts'
import { findLeastRoom, toLinearSpan } from '#shared/note/span.ts'
import { sampleCandidate } from './sample.ts'

const base = sampleCandidate.levels?.[1]

function node(
  nominal: { low: number; high: number },
  clips: { low: number | null; high: number | null },
): Level {
  if (!base) throw new Error('the sample has no level')
  return { ...base, nominal, clipsAt: clips, worstClipsAt: clips }
}

describe('linear span', () => {
  it('takes the tightest node on either side', () => {
    const levels = [
      node({ low: 0, high: 1 }, { low: -3, high: 9 }),
      node({ low: 0, high: 1 }, { low: -4, high: 6 }),
    ]
    expect(toLinearSpan(levels, { low: 0, high: 5 }, true)).toEqual({ low: -3, high: 6 })
  })

  it('counts the upper limit of an inverting node at the low end', () => {
    expect(
      toLinearSpan([node({ low: 1, high: 0 }, { low: 6, high: -3 })], { low: 0, high: 5 }, true),
    ).toEqual({
      low: -3,
      high: 6,
    })
  })

  it('follows a measurand that is given from high to low', () => {
    const levels = [
      node({ low: 0, high: 1 }, { low: 9, high: -1 }),
      node({ low: 0, high: 1 }, { low: 8, high: -4 }),
    ]
    expect(toLinearSpan(levels, { low: 5, high: 0 }, true)).toEqual({ low: 8, high: -1 })
  })

  it('is open where no node meets a limit', () => {
    expect(
      toLinearSpan([node({ low: 0, high: 1 }, { low: null, high: 7 })], { low: 0, high: 5 }, true),
    ).toEqual({
      low: null,
      high: 7,
    })
  })
})

describe('least room', () => {
  it('finds node and side, and passes over nodes that are not known', () => {
    const one = { ...node({ low: 0, high: 1 }, { low: 0, high: 1 }), room: { low: 0.2, high: 0.1 } }
    const two = { ...one, node: 'S2', room: { low: 0.05, high: 0.3 } }
    const unknown = { ...one, state: 'unknown' as const, room: { low: -1, high: -1 } }
    expect(findLeastRoom([one, unknown, two])).toMatchObject({
      fraction: 0.05,
      side: 'low',
      level: { node: 'S2' },
    })
    expect(findLeastRoom([])).toBeNull()
  })

  it('says which limit of the pin is near where the sensor sees it the other way round', () => {
    const entry = sampleCandidate.headroom?.[0]
    if (!entry) throw new Error('the sample has no headroom')
    const sensor = {
      ...node({ low: 0, high: 1 }, { low: -1, high: 9 }),
      node: 'sensor',
      room: { low: 0.01, high: 0.5 },
      roomAt: { low: 'U1 output', high: 'U1 output' },
    }
    const pin = { ...entry, pin: 'U1 output' }
    const inverting = [{ ...pin, worstClipsAt: { low: 9, high: -1 } }]
    const following = [{ ...pin, worstClipsAt: { low: -1, high: 9 } }]
    expect(findLeastRoom([sensor], inverting)).toMatchObject({
      side: 'low',
      pin: 'U1 output',
      pinSide: 'high',
    })
    expect(findLeastRoom([sensor], following)).toMatchObject({
      side: 'low',
      pin: 'U1 output',
      pinSide: 'low',
    })
  })
})
