import { afterEach, describe, expect, it, vi } from 'vitest'
import { announce, dismiss, notices, notify, statusText } from '#client/lib/messages.ts'
import { paths, safeNext } from '#client/lib/paths.ts'
import { getPreferences, setPreferences } from '#client/lib/preferences.ts'
import { dateOf, timeOf, whenOf } from '#client/lib/when.ts'

afterEach(() => {
  vi.useRealTimers()
  vi.unstubAllGlobals()
})

describe('addresses', () => {
  it('lets only paths of this application through', () => {
    expect(safeNext('/w/quellmoor/projects')).toBe('/w/quellmoor/projects')
    for (const bad of [
      null,
      '',
      '//elsewhere.example',
      '/\\elsewhere.example',
      'https://elsewhere.example',
      'w/x',
    ])
      expect(safeNext(bad)).toBeNull()
  })

  it('carries where somebody was going through sign-in', () => {
    expect(paths.signIn('/w/a?x=1')).toBe('/sign-in?next=%2Fw%2Fa%3Fx%3D1')
    expect(paths.signIn()).toBe('/sign-in')
  })
})

describe('dates and times', () => {
  it('writes the time for today and the date otherwise', () => {
    const at = new Date(2026, 4, 2, 9, 5).toISOString()
    expect(dateOf(at)).toBe('2026-05-02')
    expect(timeOf(at)).toBe('09:05')
    expect(whenOf(at, new Date(2026, 4, 2, 23, 0))).toBe('09:05')
    expect(whenOf(at, new Date(2026, 4, 3, 0, 1))).toBe('2026-05-02')
  })
})

describe('messages', () => {
  it('says the last of several sentences, after the pause', () => {
    vi.useFakeTimers()
    announce('one', 600)
    announce('two', 600)
    vi.advanceTimersByTime(599)
    expect(statusText.get()).not.toBe('two')
    vi.advanceTimersByTime(1)
    expect(statusText.get()).toBe('two')
  })

  it('lets a plain line go by itself and keeps one with an action', () => {
    vi.useFakeTimers()
    notify('saved')
    const kept = notify('deleted', { action: { label: 'Undo', onAct: () => undefined } })
    vi.advanceTimersByTime(60_000)
    expect(notices.get().map((notice) => notice.text)).toEqual(['deleted'])
    dismiss(kept)
    expect(notices.get()).toEqual([])
  })

  it('keeps the three newest', () => {
    for (const text of ['a', 'b', 'c', 'd']) notify(text, { tone: 'problem' })
    expect(notices.get().map((notice) => notice.text)).toEqual(['b', 'c', 'd'])
    for (const notice of notices.get()) dismiss(notice.id)
  })
})

describe('preferences', () => {
  it('hold for the page even where the browser keeps nothing', () => {
    const root = { dataset: {} as Record<string, string> }
    vi.stubGlobal('document', { documentElement: root })
    vi.stubGlobal('localStorage', {
      getItem: () => '{"theme":"purple","letterKeys":"no"}',
      setItem: () => {
        throw new DOMException('full', 'QuotaExceededError')
      },
    })
    expect(getPreferences()).toEqual({ theme: 'system', letterKeys: true })
    setPreferences({ theme: 'dark', decimalSign: ',' })
    expect(root.dataset.theme).toBe('dark')
    expect(getPreferences()).toMatchObject({ theme: 'dark', decimalSign: ',' })
    setPreferences({ theme: 'system' })
    expect(root.dataset.theme).toBeUndefined()
  })
})
