const KEY = 'spandrel.tab'

let own: string | null = null

/**
 * A random id of this tab that outlives a reload. A duplicated tab starts with a copy of the session storage, so the id
 * lies there only while nobody looks at the tab: the copy finds none and gets its own.
 */
export function tabId(): string {
  if (own !== null) return own
  const id = read() ?? fresh()
  own = id
  takeOut()
  window.addEventListener('pagehide', () => putBack(id))
  window.addEventListener('pageshow', takeOut)
  document.addEventListener('visibilitychange', () =>
    document.visibilityState === 'hidden' ? putBack(id) : takeOut(),
  )
  return id
}

const fresh = (): string =>
  Array.from(crypto.getRandomValues(new Uint32Array(4)), (part) => part.toString(36)).join('')

function read(): string | null {
  try {
    return sessionStorage.getItem(KEY)
  } catch {
    return null
  }
}

function putBack(id: string): void {
  try {
    sessionStorage.setItem(KEY, id)
  } catch {
    // Without it the next page of this tab counts as another tab.
  }
}

function takeOut(): void {
  try {
    sessionStorage.removeItem(KEY)
  } catch {
    // As above.
  }
}
