import { fieldId } from '../words/steps.ts'

const controls = 'input, select, textarea, button, a[href], summary'

/**
 * Puts the focus on the control of a path, or on the first control of its group; folded groups on the way are opened.
 * Where the path has no control of its own, the nearest one above it takes the focus. False where there is none.
 */
export function focusField(path: string): boolean {
  for (let at = path; at !== ''; at = at.slice(0, Math.max(0, at.lastIndexOf('.')))) {
    const element = document.getElementById(fieldId(at))
    if (!element) continue
    for (let fold = element.closest('details'); fold; fold = fold.parentElement?.closest('details') ?? null)
      fold.open = true
    if (element instanceof HTMLDetailsElement) element.open = true
    const target = element.matches(controls) ? element : element.querySelector<HTMLElement>(controls)
    if (!target) continue
    target.focus()
    target.scrollIntoView({ block: 'center' })
    return true
  }
  return false
}
