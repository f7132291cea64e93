import { announce } from '#client/lib/messages.ts'
import type { Change } from '../draft/draft-state.ts'
import { usePlanner } from '../planner-context.tsx'

/**
 * Takes what a control of the plan proposes: the control goes away with what it cured, so the focus is put on the
 * answer (the element with this id) that has changed by it, and what was taken is said.
 */
export function useTaking(answerId: string): (changes: Change[], label: string, said: string) => void {
  const { dispatch } = usePlanner()
  return (changes, label, said) => {
    dispatch({ type: 'set', changes, label })
    document.getElementById(answerId)?.focus()
    announce(`Done: ${said}. Undo takes it back.`)
  }
}
