import { describe, expect, it } from 'vitest'
import { createDraft, draftReducer } from '#client/features/plan/draft/draft-state.ts'
import { getAt, type DraftDocument } from '#client/features/plan/draft/paths.ts'
import { firstExample } from '#client/features/plan/examples.ts'
import { companionsOf } from '#client/features/plan/form/companions.ts'
import { fixedRefs, nearestOther, refusedPart } from '#client/features/plan/words/fixed-parts.ts'

const example: DraftDocument = { ...firstExample }
const path = 'choose.values.R1'

const fix = (document: DraftDocument, inUse?: string) =>
  draftReducer(createDraft(document), {
    type: 'type',
    path,
    value: 4700,
    text: '4k7',
    label: 'R1',
    also: companionsOf(path, 4700, document, inUse),
  })

describe('parts fixed by hand', () => {
  it('refuses what is no resistance or capacitance', () => {
    expect(refusedPart(0, 'Ω')).toContain('a resistance above 0')
    expect(refusedPart(-1, 'F')).toContain('a capacitance above 0')
    expect(refusedPart(4700, 'Ω')).toBeNull()
  })

  it('names the nearest standard value only where there is one to name', () => {
    expect(nearestOther(4800, 'E24')).toBe(4700)
    expect(nearestOther(4700, 'E24')).toBeNull()
    expect(nearestOther(0, 'E24')).toBeNull()
    expect(nearestOther(-5, 'E24')).toBeNull()
  })

  it('lists all that are fixed, in the arrangement or not', () => {
    expect(fixedRefs(example)).toEqual([])
    expect(fixedRefs({ ...example, choose: { values: { R1: 4700, R77: 1 } } })).toEqual(['R1', 'R77'])
  })

  it('keeps the arrangement in use and lets the set of values go, in one undo step', () => {
    const before = { ...example, choose: { pick: 2 } }
    const state = fix(before, 'inverting')
    expect(getAt(state.document, 'choose')).toEqual({ arrangement: 'inverting', values: { R1: 4700 } })
    expect(draftReducer(state, { type: 'undo' }).document).toBe(before)
  })

  it('changes nothing else where an arrangement was chosen, none is in use or the part is freed', () => {
    const chosen = { ...example, choose: { arrangement: 'passive', pick: 1 } }
    expect(getAt(fix(chosen, 'inverting').document, 'choose')).toEqual({
      arrangement: 'passive',
      pick: 1,
      values: { R1: 4700 },
    })
    expect(companionsOf(path, 4700, example)).toEqual([])
    expect(companionsOf(path, undefined, example, 'inverting')).toEqual([])
  })
})
