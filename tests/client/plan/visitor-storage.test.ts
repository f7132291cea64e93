import { describe, expect, it } from 'vitest'
import { keepVisitorWork, readVisitorWork, VISITOR_KEY } from '#client/features/plan/draft/visitor-storage.ts'
import { compareDrafts } from '#shared/design/document-differences.ts'
import type { DraftDocument } from '#client/features/plan/draft/paths.ts'

function memory(first?: string) {
  const held = new Map(first === undefined ? [] : [[VISITOR_KEY, first]])
  return {
    held,
    getItem: (key: string) => held.get(key) ?? null,
    setItem: (key: string, value: string) => void held.set(key, value),
    removeItem: (key: string) => void held.delete(key),
  }
}

const document: DraftDocument = {
  format: 'spandrel-design/1',
  name: 'Flow velocity',
  sensor: { kind: 'voltage', output: { low: -0.35 } },
  converter: {},
  rails: { positive: 5 },
}

describe('what a visitor leaves in the browser', () => {
  it('comes back as it was, unfinished and unreadable fields included', () => {
    const store = memory()
    const typed = {
      'sensor.output.high': { text: '0,3x', reason: 'not a number' },
      name: { text: 'Flow velocity' },
    }
    expect(keepVisitorWork(store, { document, typed, savedAt: '2026-04-17T14:32:07.000Z' })).toBe(true)
    expect(readVisitorWork(store)).toEqual({
      document,
      typed: { 'sensor.output.high': { text: '0,3x', reason: 'not a number' } },
      savedAt: '2026-04-17T14:32:07.000Z',
    })
  })

  it('keeps a value that is out of its range, so that its field can say so', () => {
    const store = memory()
    const wrong = { ...document, converter: { bits: 99 } }
    keepVisitorWork(store, { document: wrong, typed: {}, savedAt: '' })
    expect(readVisitorWork(store)?.document).toEqual(wrong)
  })

  it.each([
    ['nothing', undefined],
    ['broken JSON', '{"version":1'],
    ['another version', JSON.stringify({ version: 2, document })],
    ['another format', JSON.stringify({ version: 1, document: { ...document, format: 'other/1' } })],
    ['a section that is no section', JSON.stringify({ version: 1, document: { ...document, sensor: 5 } })],
    ['a list', JSON.stringify([1, 2])],
  ])('counts %s as nothing kept', (_, text) => {
    expect(readVisitorWork(memory(text))).toBeNull()
  })

  it('says when the browser keeps nothing', () => {
    const full = {
      ...memory(),
      setItem: () => {
        throw new DOMException('full', 'QuotaExceededError')
      },
    }
    expect(keepVisitorWork(full, { document, typed: {}, savedAt: '' })).toBe(false)
  })
})

describe('comparing two drafts', () => {
  it('lists every key that differs, with both values', () => {
    const theirs: DraftDocument = {
      ...document,
      rails: { positive: 3.3, tolerance: 0.05 },
      sensor: document.sensor,
    }
    expect(compareDrafts(document, theirs)).toEqual([
      { path: 'rails.positive', mine: 5, theirs: 3.3 },
      { path: 'rails.tolerance', mine: undefined, theirs: 0.05 },
    ])
  })

  it('finds nothing between equal drafts', () => {
    expect(compareDrafts(document, JSON.parse(JSON.stringify(document)) as DraftDocument)).toEqual([])
  })
})
