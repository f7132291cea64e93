import { useSyncExternalStore } from 'react'
import { z } from 'zod'

/** Choices of a person that belong to this browser, not to the work. */
const preferencesSchema = z.object({
  theme: z.enum(['system', 'light', 'dark']).catch('system'),
  /** Unknown until `1,000` had to be asked about, or until it was set. */
  decimalSign: z.enum(['.', ',']).optional().catch(undefined),
  /** Keys without Ctrl or Alt, in lists and drawings. */
  letterKeys: z.boolean().catch(true),
})
export type Preferences = z.output<typeof preferencesSchema>

const KEY = 'spandrel.preferences'
const listeners = new Set<() => void>()
let current: Preferences | null = null

function read(): Preferences {
  let stored: unknown = {}
  try {
    stored = JSON.parse(localStorage.getItem(KEY) ?? '{}')
  } catch {
    // Storage may be closed to us or hold something else; preferences then last as long as the page.
  }
  const parsed = preferencesSchema.safeParse(stored)
  return parsed.success ? parsed.data : preferencesSchema.parse({})
}

export function getPreferences(): Preferences {
  current ??= read()
  return current
}

export function setPreferences(change: Partial<Preferences>): void {
  current = { ...getPreferences(), ...change }
  try {
    localStorage.setItem(KEY, JSON.stringify(current))
  } catch {
    // As above.
  }
  applyTheme(current.theme)
  for (const listener of listeners) listener()
}

function applyTheme(theme: Preferences['theme']): void {
  if (theme === 'system') delete document.documentElement.dataset.theme
  else document.documentElement.dataset.theme = theme
}

function subscribe(listener: () => void): () => void {
  const onStorage = (event: StorageEvent) => {
    if (event.key !== KEY) return
    current = null
    applyTheme(getPreferences().theme)
    listener()
  }
  listeners.add(listener)
  window.addEventListener('storage', onStorage)
  return () => {
    listeners.delete(listener)
    window.removeEventListener('storage', onStorage)
  }
}

const initial = preferencesSchema.parse({})

export const usePreferences = (): Preferences =>
  useSyncExternalStore(subscribe, getPreferences, () => initial)
