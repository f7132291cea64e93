import type { Load } from '#shared/design/plan.ts'
import type { Assessment } from './assess.ts'

/**
 * Current that each reference has to give and to take, worst case over all boards and places, against what it can.
 * Sources that share one reference are added, each at its own worst: an outer bound. A.
 */
export function toLoads(assessment: Assessment): Load[] {
  const { references, variables } = assessment.chains.low
  const list: Load[] = []
  const names = new Map<string, { node: string; source: number; sink: number }>()
  if (references.converter)
    names.set(references.converter.variable, { node: 'vadcref', ...limitsOf(references.converter) })
  if (references.shift && !names.has(references.shift.variable))
    names.set(references.shift.variable, { node: 'vref', ...limitsOf(references.shift) })
  // The positive rail feeds everything; what it carries is no question of a reference.
  names.delete('positiveRail')
  for (const [variable, reference] of names) {
    const own = variables.find((v) => v.id === variable)
    const refs = new Set(own?.injections.map((i) => i.ref) ?? [])
    const drawn = assessment.loads.filter((load) => refs.has(load.ref))
    if (drawn.length === 0) continue
    const source = Math.max(
      0,
      drawn.reduce((sum, l) => sum + l.high, 0),
    )
    const sink = Math.max(0, -drawn.reduce((sum, l) => sum + l.low, 0))
    const over = source > reference.source * (1 + 1e-9) || sink > reference.sink + NEGLIGIBLE
    list.push({
      node: reference.node,
      source,
      sink,
      allowed: { source: reference.source, sink: reference.sink },
      state: over ? 'over' : 'clear',
    })
  }
  return list
}

/** Bias currents pushed into a reference are no load, A. */
const NEGLIGIBLE = 1e-6

const limitsOf = (r: { source: number; sink: number }) => ({ source: r.source, sink: r.sink })
