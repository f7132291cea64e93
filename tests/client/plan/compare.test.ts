import { describe, expect, it } from 'vitest'
import { keptKey, readKept, writeKept } from '#client/features/plan/draft/kept-variant.ts'
import {
  answerText,
  causeLabel,
  causeText,
  changeText,
  isBetter,
  splitCauses,
  splitEffects,
} from '#client/features/plan/compare/compare-words.ts'
import { firstExample } from '#client/features/plan/examples.ts'
import type { Effect } from '#shared/studies/compare.ts'

const document = { ...firstExample }

class Memory {
  readonly held = new Map<string, string>()
  getItem = (key: string) => this.held.get(key) ?? null
  setItem = (key: string, value: string) => void this.held.set(key, value)
  removeItem = (key: string) => void this.held.delete(key)
}

describe('a kept variant', () => {
  it('comes back as it was, one for each channel and one for the visitor', () => {
    const store = new Memory()
    const kept = { document, at: '2026-04-17T10:00:00Z' }
    expect(writeKept(store, keptKey('c1'), kept)).toBe(true)
    expect(readKept(store, keptKey('c1'))).toEqual(kept)
    expect(readKept(store, keptKey(null))).toBeNull()
    writeKept(store, keptKey('c1'), null)
    expect(readKept(store, keptKey('c1'))).toBeNull()
  })

  it('is nothing where something else stands in its place', () => {
    const store = new Memory()
    for (const text of ['', '{', 'null', '[]', '{"at":"x"}', '{"document":{"format":"other"},"at":"x"}']) {
      store.setItem('k', text)
      expect(readKept(store, 'k'), text).toBeNull()
    }
  })

  it('is not lost with an error where the browser keeps nothing', () => {
    const closed = {
      getItem: () => null,
      setItem: () => {
        throw new Error('closed')
      },
      removeItem: () => undefined,
    }
    expect(writeKept(closed, 'k', { document, at: 'x' })).toBe(false)
  })
})

const effect = (more: Partial<Effect>): Effect => ({
  id: 'x',
  label: 'x',
  unit: 'V',
  display: 'plain',
  a: 1,
  b: 1.5,
  change: 0.5,
  direction: 'up',
  better: null,
  ...more,
})
const plain = (text: string) => text.replaceAll('\u00a0', ' ')

describe('the words of a comparison', () => {
  it('say direction, amount and share of a change', () => {
    expect(plain(changeText(effect({})))).toBe('up by 0.5 V, 50 %')
    expect(plain(changeText(effect({ b: 0.75, change: -0.25, better: false })))).toBe(
      'down by 0.25 V, 25 %: worse',
    )
  })

  it('say points for what is a percentage already', () => {
    expect(
      plain(changeText(effect({ unit: '', display: 'percent', a: 0.03, b: 0.034, change: 0.004 }))),
    ).toBe('up by 0.4 percentage points')
  })

  it('keep silent about better and worse where it hardly matters', () => {
    const hardly = effect({ a: 1, b: 1.0001, change: 1e-4, better: true })
    expect(plain(changeText(hardly))).not.toContain('better')
    expect(isBetter(hardly)).toBeNull()
    expect(isBetter(effect({ better: true }))).toBe(true)
  })

  it('name what is new, gone or changed without a figure', () => {
    expect(changeText(effect({ a: null, change: null, direction: 'added' }))).toBe('new')
    expect(changeText(effect({ b: null, change: null, direction: 'removed' }))).toBe('no longer there')
    expect(changeText(effect({ a: 'a', b: 'b', change: null, direction: 'changed' }))).toBe('changed')
    expect(answerText(effect({}), null)).toBe('none')
  })

  it('name edits by their fields, with the usual value where nothing was said', () => {
    expect(causeLabel('parts.resistors.tolerance', 'voltage')).toBe('Resistor tolerance')
    expect(causeLabel('choose.values.R1', 'voltage')).toBe('R1 fixed at')
    expect(plain(causeText('parts.resistors.tolerance', undefined, document, 'voltage'))).toBe(
      '0.1 %, as usual',
    )
    expect(plain(causeText('parts.resistors.tolerance', 0.005, document, 'voltage'))).toBe('0.5 %')
    expect(plain(causeText('choose.values.C9', 6.8e-7, document, 'voltage'))).toBe('680 nF')
    expect(causeText('choose.filter.kind', undefined, document, 'voltage')).toBe('not stated')
  })

  it('set edits without effect apart', () => {
    const cause = (path: string, idle: boolean | null) => ({ path, a: 1, b: 2, idle })
    const { shown, idle } = splitCauses([cause('x', false), cause('y', true), cause('z', null)])
    expect(shown.map(({ path }) => path)).toEqual(['x', 'z'])
    expect(idle.map(({ path }) => path)).toEqual(['y'])
  })
})

describe('answers that hardly moved', () => {
  it('are kept apart from those that can be noticed', () => {
    const of = (id: string, a: number, b: number) => ({ id, a, b, change: b - a }) as Effect
    const { shown, faint } = splitEffects([
      of('far', 1, 1.1),
      of('near', 1, 1.0005),
      of('from none', 0, 1e-9),
    ])
    expect(shown.map(({ id }) => id)).toEqual(['far', 'from none'])
    expect(faint.map(({ id }) => id)).toEqual(['near'])
  })
})
