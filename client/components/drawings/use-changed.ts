import { useEffect, useState } from 'react'

const SHOWN_FOR = 2000

/** True for two seconds after a text changed, never on the first one. */
export function useChanged(text: string): boolean {
  const [seen, setSeen] = useState({ text, changed: false })
  // Adjusted while rendering, so that no frame shows the new text unmarked.
  if (seen.text !== text) setSeen({ text, changed: true })
  useEffect(() => {
    if (!seen.changed) return
    const timer = setTimeout(() => setSeen((s) => ({ ...s, changed: false })), SHOWN_FOR)
    return () => clearTimeout(timer)
  }, [seen])
  return seen.changed
}
