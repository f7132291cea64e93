import { useEffect, useRef } from 'react'
import { useNavigate } from 'react-router-dom'
import { announce } from '#client/lib/messages.ts'
import type { PlannerValue } from '../planner-context.tsx'
import { neighbours } from '../words/steps.ts'
import { focusField } from './focus-field.ts'

/** Keys of the plan: F8 next finding, Ctrl+Enter next step, Ctrl+Z undo, Ctrl+Shift+Z or Ctrl+Y redo. */
export function usePlanKeys(value: PlannerValue): void {
  const navigate = useNavigate()
  const latest = useRef(value)
  const at = useRef(-1)
  useEffect(() => {
    latest.current = value
  })
  useEffect(() => {
    const handle = (event: KeyboardEvent) => {
      if (event.defaultPrevented || document.querySelector('dialog[open]')) return
      const act = actFor(event)
      if (!act) return
      event.preventDefault()
      act()
    }
    const actFor = (event: KeyboardEvent): (() => void) | null => {
      const control = event.ctrlKey || event.metaKey
      const key = event.key.toLowerCase()
      if (event.key === 'F8') return () => nextFinding(event.shiftKey ? -1 : 1)
      if (!control || event.altKey) return null
      if (key === 'enter') return nextStep
      if (key === 'z') return () => travel(event.shiftKey ? 'redo' : 'undo')
      if (key === 'y') return () => travel('redo')
      return null
    }
    const nextFinding = (direction: 1 | -1) => {
      const { findings, goTo } = latest.current
      const listed = findings.filter((finding) => finding.path !== null)
      if (listed.length === 0) return announce('No findings.')
      at.current = (at.current + direction + listed.length) % listed.length
      const finding = listed[at.current]
      if (!finding?.path) return
      goTo(finding.path)
      announce([finding.title, finding.text].filter(Boolean).join('. '), 150)
    }
    const nextStep = () => {
      const { step, stepHref } = latest.current
      const next = step ? neighbours(step).next : 'measurand'
      if (next) void navigate(stepHref(next))
    }
    const travel = (type: 'undo' | 'redo') => {
      const { state, dispatch, readOnly } = latest.current
      if (readOnly !== null) return
      const entry = (type === 'undo' ? state.past : state.future).at(-1)
      if (!entry) return announce(type === 'undo' ? 'Nothing to undo.' : 'Nothing to do again.')
      dispatch({ type })
      announce(`${type === 'undo' ? 'Undone' : 'Done again'}: ${entry.label}.`)
      // Only where the field stands on this page: undo does not throw anybody out of the step.
      const { path } = entry
      if (path !== null) requestAnimationFrame(() => focusField(path))
    }
    window.addEventListener('keydown', handle)
    return () => window.removeEventListener('keydown', handle)
  }, [navigate])
}
