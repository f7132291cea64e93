import { describe, expect, it } from 'vitest'
import { createDraft, draftReducer } from '#client/features/plan/draft/draft-state.ts'
import { getAt, type DraftDocument } from '#client/features/plan/draft/paths.ts'
import { appliesTo, companionsOf } from '#client/features/plan/form/companions.ts'
import { firstExample } from '#client/features/plan/examples.ts'
import { readDesign } from '#shared/design/read.ts'

/** As the fields do it: a value with whatever has to go along. */
function set(document: DraftDocument, path: string, value: unknown): DraftDocument {
  const also = companionsOf(path, value, document)
  return draftReducer(createDraft(document), {
    type: 'type',
    path,
    value,
    text: String(value),
    label: path,
    also,
  }).document
}

const example: DraftDocument = { ...firstExample }

describe('keys that go together', () => {
  it('a typed corner asks for a filter, and a filter that is taken out has none', () => {
    const cornered = set(example, 'choose.filter.corner', 200)
    expect(getAt(cornered, 'choose.filter')).toEqual({ kind: 'rc', corner: 200 })
    expect(readDesign(cornered).ok).toBe(true)
    expect(getAt(set(cornered, 'choose.filter.kind', 'none'), 'choose.filter')).toEqual({ kind: 'none' })
    expect(getAt(set(cornered, 'choose.filter.kind', undefined), 'choose')).toBeUndefined()
  })

  it('an order or a response asks for sections, and goes with them', () => {
    const sections = set(set(example, 'choose.filter.order', 4), 'choose.filter.response', 'bessel')
    expect(getAt(sections, 'choose.filter')).toEqual({ kind: 'sallen-key', order: 4, response: 'bessel' })
    expect(readDesign(sections).ok).toBe(true)
    expect(getAt(set(sections, 'choose.filter.kind', 'rc'), 'choose.filter')).toEqual({ kind: 'rc' })
    expect(getAt(set(sections, 'choose.filter.kind', 'multiple-feedback'), 'choose.filter.order')).toBe(4)
    expect(appliesTo('choose.filter.order', example)).toBe(false)
    expect(appliesTo('choose.filter.order', set(example, 'choose.filter.kind', 'multiple-feedback'))).toBe(
      true,
    )
  })

  it('a modulator and its digital filter belong to an oversampling converter', () => {
    const fast = set(set(example, 'converter.architecture', 'oversampling'), 'converter.modulatorRate', 1e6)
    expect(appliesTo('converter.digitalFilter', fast)).toBe(true)
    expect(appliesTo('converter.digitalFilter', example)).toBe(false)
    expect(getAt(set(fast, 'converter.architecture', 'sar'), 'converter.modulatorRate')).toBeUndefined()
  })

  it('a multiplexer without channels is none', () => {
    const many = set(
      set(example, 'converter.multiplexed.channels', 4),
      'converter.multiplexed.resistance',
      100,
    )
    expect(readDesign(many).ok).toBe(true)
    expect(getAt(set(many, 'converter.multiplexed.channels', undefined), 'converter.multiplexed')).toBe(
      undefined,
    )
    expect(appliesTo('converter.multiplexed.resistance', example)).toBe(false)
  })

  it('a single-ended signal loses its common mode, and only a differential one is asked for it', () => {
    const differential = set(set(example, 'sensor.wiring', 'differential'), 'sensor.commonMode', {
      low: 2,
      high: 3,
    })
    expect(readDesign(differential).ok).toBe(true)
    expect(readDesign(set(differential, 'sensor.wiring', 'single-ended')).ok).toBe(true)
    expect(appliesTo('sensor.commonMode', example)).toBe(false)
    expect(appliesTo('sensor.commonMode', set(example, 'sensor.wiring', 'differential'))).toBe(true)
  })

  it('a reference that is the rail follows it, volt for volt', () => {
    const shared = set(example, 'converter.reference.same', 'positive')
    expect(getAt(shared, 'converter.reference.voltage')).toBe(5)
    expect(getAt(set(shared, 'rails.positive', 4.5), 'converter.reference.voltage')).toBe(4.5)
    expect(readDesign(set(shared, 'rails.positive', 4.5)).ok).toBe(true)
  })

  it('a source that is shared has no voltage of its own', () => {
    const own = set(set(example, 'shiftReference.same', undefined), 'shiftReference.voltage', 1.25)
    expect(readDesign(own).ok).toBe(true)
    const shared = set(own, 'shiftReference.same', 'converter')
    expect(getAt(shared, 'shiftReference')).toEqual({ same: 'converter' })
  })

  it('is one undo step', () => {
    const start = createDraft(example)
    const action = {
      type: 'type' as const,
      path: 'choose.filter.corner',
      value: 200,
      text: '200',
      label: 'Corner',
      also: companionsOf('choose.filter.corner', 200, example),
    }
    const typed = draftReducer(start, action)
    expect(draftReducer(typed, { type: 'undo' }).document).toBe(example)
  })
})
