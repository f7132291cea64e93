import { createStore } from './store.ts'

/** The one polite status line of a page, and the notes at its foot. */
export const statusText = createStore('')

let pending: ReturnType<typeof setTimeout> | undefined

/**
 * Says a sentence through the page's polite status region. `after` waits for a pause in typing (600 ms for findings);
 * a later sentence replaces one that still waits.
 */
export function announce(text: string, after = 0): void {
  clearTimeout(pending)
  pending = setTimeout(() => {
    // The same sentence twice would be silent the second time.
    statusText.set((current) => (current === text ? `${text}\u00a0` : text))
  }, after)
}

export interface Notice {
  id: number
  text: string
  tone: 'plain' | 'problem'
  action?: { label: string; onAct(): void }
}

export const notices = createStore<readonly Notice[]>([])

let nextId = 1
const STAYS = 8000
const MOST = 3

interface NoticeOptions {
  tone?: Notice['tone']
  action?: Notice['action']
}

/**
 * A line at the foot of the page. One with an action or about a problem stays until it is closed or pushed out by
 * newer ones; a plain one goes by itself.
 */
export function notify(text: string, { tone = 'plain', action }: NoticeOptions = {}): number {
  const id = nextId++
  const notice: Notice = { id, text, tone, ...(action ? { action } : {}) }
  notices.set((list) => [...list, notice].slice(-MOST))
  announce(text)
  if (tone === 'plain' && !action) setTimeout(() => dismiss(id), STAYS)
  return id
}

export function dismiss(id: number): void {
  notices.set((list) => list.filter((notice) => notice.id !== id))
}
