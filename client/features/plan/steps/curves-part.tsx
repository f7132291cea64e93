import type { ReactNode } from 'react'
import type { Curves } from '#shared/studies/types.ts'
import { DrawingBoundary } from './drawing-boundary.tsx'
import { NotYet } from './step-parts.tsx'
import { useCurves, useSeen } from './use-curves.ts'

/** Plots over frequency or time: computed once they come into sight, away from the page's thread. */
export function CurvesPart({ what, children }: { what: string; children(curves: Curves): ReactNode }) {
  const [hold, seen] = useSeen()
  const state = useCurves(seen)
  return (
    <div ref={hold} className="plan-curves" aria-busy={state.kind === 'awaited' && seen}>
      {state.kind === 'awaited' && <NotYet>{what} is being computed.</NotYet>}
      {state.kind === 'failed' && (
        <p className="plan-fault">
          {what} cannot be drawn: {state.message}
        </p>
      )}
      {state.kind === 'ready' && (
        <DrawingBoundary what={what}>
          <div className={state.stale ? 'd-stale' : undefined}>{children(state.curves)}</div>
        </DrawingBoundary>
      )}
    </div>
  )
}
