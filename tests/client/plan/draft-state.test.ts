import { describe, expect, it } from 'vitest'
import {
  createDraft,
  draftReducer,
  misreadFields,
  type DraftAction,
  type DraftState,
} from '#client/features/plan/draft/draft-state.ts'
import { getAt, setAt, type DraftDocument } from '#client/features/plan/draft/paths.ts'

const document: DraftDocument = {
  format: 'spandrel-design/1',
  name: 'Flow velocity',
  sensor: { kind: 'voltage', output: { low: -0.35, high: 0.35 } },
}

const run = (actions: DraftAction[], from: DraftState = createDraft(document)) =>
  actions.reduce(draftReducer, from)

const type = (path: string, value: unknown, text: string): DraftAction => ({
  type: 'type',
  path,
  value,
  text,
  label: path,
})

describe('a draft', () => {
  it('puts a typed value into the document and keeps the text as it was typed', () => {
    const state = run([type('sensor.sourceResistance', 4700, '4k7')])
    expect(getAt(state.document, 'sensor.sourceResistance')).toBe(4700)
    expect(state.typed['sensor.sourceResistance']).toEqual({ text: '4k7' })
  })

  it('keeps text that cannot be read, and the last good value beside it', () => {
    const path = 'sensor.output.high'
    const state = run([{ type: 'misread', path, text: '0,3x', reason: 'not a number', label: 'Output' }])
    expect(getAt(state.document, path)).toBe(0.35)
    expect(misreadFields(state.typed)).toEqual([{ path, text: '0,3x', reason: 'not a number' }])
  })

  it('takes back typing in one field as one step, and text that could not be read with it', () => {
    const path = 'sensor.output.high'
    const state = run([
      type(path, 0.4, '0.4'),
      { type: 'misread', path, text: '0.4.', reason: 'not a number', label: path },
      type(path, 0.45, '0.45'),
      { type: 'undo' },
    ])
    expect(state.document).toBe(document)
    expect(state.typed).toEqual({})
  })

  it('starts a new step once a field was left', () => {
    const path = 'sensor.output.high'
    const state = run([
      type(path, 0.4, '0.4'),
      { type: 'leave', path },
      type(path, 0.5, '0.5'),
      { type: 'undo' },
    ])
    expect(getAt(state.document, path)).toBe(0.4)
    expect(state.typed[path]).toEqual({ text: '0.4' })
  })

  it('starts a new step when another field is typed in', () => {
    const state = run([
      type('sensor.output.low', -0.3, '-0.3'),
      type('sensor.output.high', 0.3, '0.3'),
      { type: 'undo' },
    ])
    expect(getAt(state.document, 'sensor.output')).toEqual({ low: -0.3, high: 0.35 })
  })

  it('does again what was undone, until something new is done', () => {
    const undone = run([
      type('name', 'A', 'A'),
      { type: 'leave', path: 'name' },
      type('name', 'B', 'B'),
      { type: 'undo' },
    ])
    expect(getAt(draftReducer(undone, { type: 'redo' }).document, 'name')).toBe('B')
    const changed = run([type('sensor.output.low', -1, '-1'), { type: 'redo' }], undone)
    expect(getAt(changed.document, 'name')).toBe('A')
    expect(changed.future).toEqual([])
  })

  it('returns to the very same documents over many undos and redos', () => {
    let state = createDraft(document)
    const seen = [state.document]
    for (let i = 0; i < 20; i += 1) {
      state = run(
        [type('sensor.output.high', i + 1, String(i + 1)), { type: 'leave', path: 'sensor.output.high' }],
        state,
      )
      seen.push(state.document)
    }
    for (let i = 19; i >= 0; i -= 1) {
      state = draftReducer(state, { type: 'undo' })
      expect(state.document).toBe(seen[i])
    }
    for (let i = 1; i <= 20; i += 1) {
      state = draftReducer(state, { type: 'redo' })
      expect(state.document).toBe(seen[i])
    }
  })

  it('does nothing where there is nothing to undo or redo', () => {
    const state = createDraft(document)
    expect(draftReducer(state, { type: 'undo' })).toBe(state)
    expect(draftReducer(state, { type: 'redo' })).toBe(state)
  })

  it('counts text that is only read again as no change', () => {
    const once = run([type('name', 'A', 'A')])
    expect(draftReducer(once, type('name', 'A', 'A'))).toBe(once)
  })

  it('drops the typed text of everything under a path that is set as a whole', () => {
    const state = run([
      type('sensor.output.low', -1, '-1'),
      { type: 'set', changes: [{ path: 'sensor', value: { kind: 'bridge' } }], label: 'Sensor kind' },
    ])
    expect(state.typed).toEqual({})
    expect(getAt(state.document, 'sensor')).toEqual({ kind: 'bridge' })
  })

  it('can take back a replaced document', () => {
    const state = run([{ type: 'replace', document: { name: 'Other' }, label: 'Example' }, { type: 'undo' }])
    expect(state.document).toBe(document)
  })
})

describe('paths', () => {
  it('changes a copy and shares what did not change', () => {
    const next = setAt(document, 'sensor.output.low', -1)
    expect(document).toHaveProperty('sensor.output.low', -0.35)
    expect(next).toHaveProperty('sensor.output', { low: -1, high: 0.35 })
  })

  it('removes a group with its last key, but never a section of the design', () => {
    const grouped = setAt(setAt(document, 'sensor.commonMode.low', 2.4), 'sensor.commonMode.low', undefined)
    expect(grouped).toEqual(document)
    expect(setAt({ rails: { positive: 5 } }, 'rails.positive', undefined)).toEqual({ rails: {} })
  })

  it('makes lists for numbered keys', () => {
    const next = setAt(setAt({}, 'choose.stages.0', { ref: 'S1' }), 'choose.stages.0.gain', 10)
    expect(next).toEqual({ choose: { stages: [{ ref: 'S1', gain: 10 }] } })
    expect(setAt(next, 'choose.stages.0', undefined)).toEqual({})
  })

  it('reads nothing from what is only inherited', () => {
    expect(getAt(document, 'constructor.name')).toBeUndefined()
    expect(getAt(document, 'name.length')).toBeUndefined()
  })
})
