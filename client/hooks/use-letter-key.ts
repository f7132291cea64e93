import { useEffect, useRef } from 'react'
import { usePreferences } from '#client/lib/preferences.ts'

const typing = 'input, textarea, select, [contenteditable="true"], dialog[open]'

/** True while a key would be text. */
export function isTyping(target: EventTarget | null): boolean {
  return target instanceof Element && target.closest(typing) !== null
}

/** A key without Ctrl or Alt, anywhere on the page but where text is typed; can be turned off under *Units and keys*. */
export function useLetterKey(key: string, onPress: () => void): void {
  const { letterKeys } = usePreferences()
  const latest = useRef(onPress)
  useEffect(() => {
    latest.current = onPress
  })
  useEffect(() => {
    if (!letterKeys) return
    const handle = (event: KeyboardEvent) => {
      if (event.defaultPrevented || event.ctrlKey || event.metaKey || event.altKey) return
      if (event.key !== key || isTyping(event.target)) return
      event.preventDefault()
      latest.current()
    }
    window.addEventListener('keydown', handle)
    return () => window.removeEventListener('keydown', handle)
  }, [key, letterKeys])
}
