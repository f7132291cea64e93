import { useSyncExternalStore } from 'react'
import { Link } from 'react-router-dom'
import { TextButton } from '#client/components/buttons.tsx'
import { announce } from '#client/lib/messages.ts'
import { compareHref, keptOwner } from '../compare/compare-href.ts'
import { keptVariant } from '../draft/kept-variant.ts'
import { usePlanner } from '../planner-context.tsx'

/** Sets the draft aside, to hold later edits against it; once there is one, leads to the comparison. */
export function KeepControls() {
  const { state, where } = usePlanner()
  const store = keptVariant(keptOwner(where))
  const kept = useSyncExternalStore(store.subscribe, store.get)
  if (kept) return <Link to={compareHref(where)}>Compare with the kept variant</Link>
  return (
    <TextButton
      onClick={() => {
        store.keep(state.document)
        announce('This draft is kept. Change what you like, then compare.')
      }}
    >
      Keep this draft to compare
    </TextButton>
  )
}
