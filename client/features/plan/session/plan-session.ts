import type { Fault, Plan } from '#shared/design/plan.ts'
import { readDesign } from '#shared/design/read.ts'
import type { Design, DesignDocument } from '#shared/design/schema.ts'
import { planInWorker, PlanRefused } from '#client/lib/plan-client.ts'
import { createStore, type Store } from '#client/lib/store.ts'
import { createDraftStore, type DraftStore } from '../draft/draft-store.ts'
import type { Typed } from '../draft/draft-state.ts'
import type { DraftDocument } from '../draft/paths.ts'

/** A plan with the very document that it is the plan of. */
export interface Planned {
  document: DesignDocument
  design: Design
  plan: Plan
  /** Origin of the draft that it was made of. */
  origin: number
}

export interface PlanState {
  /** The last good plan; it stays on screen, greyed, while the draft cannot be planned. */
  planned: Planned | null
  status: 'current' | 'computing' | 'refused' | 'failed'
  /** What keeps the present draft from being a design. */
  faults: readonly Fault[]
  /** Why the calculation itself failed. */
  message: string | null
  /** Time of the last good plan, ISO 8601. */
  at: string | null
}

/** Nothing to show yet, as the first plan is still being made. */
export const isAwaited = ({ planned, status }: PlanState): boolean =>
  planned === null && status === 'computing'

type Planner = (document: unknown, options: { signal: AbortSignal }) => Promise<Plan>

/** A draft with its plan, outside React: both survive a change of route. */
export interface PlanSession {
  draft: DraftStore
  planning: Store<PlanState>
  /** Asks again after a failure. */
  retry(): void
}

const initial: PlanState = { planned: null, status: 'computing', faults: [], message: null, at: null }

/**
 * Plans the draft again at each change. The question before is aborted, so that the newest always wins and an answer
 * to an older draft is never shown. What is not a design is told by its faults at once, without the worker.
 */
export function createPlanSession(
  document: DraftDocument,
  typed: Typed = {},
  planner: Planner = planInWorker,
): PlanSession {
  const draft = createDraftStore(document, typed)
  const planning = createStore<PlanState>(initial)
  let seen: DraftDocument | null = null
  let asked = new AbortController()

  const update = () => {
    const { document: now, origin } = draft.getState()
    if (now === seen) return
    seen = now
    asked.abort()
    const read = readDesign(now)
    if (!read.ok) {
      planning.set((state) => ({
        ...state,
        // The last good figures are worth showing only as long as they are about the same work.
        planned: state.planned?.origin === origin ? state.planned : null,
        status: 'refused',
        faults: read.faults,
        message: null,
      }))
      return
    }
    asked = new AbortController()
    const { signal } = asked
    planning.set((state) => ({ ...state, status: 'computing', faults: [], message: null }))
    planner(read.document, { signal }).then(
      (plan) => {
        if (signal.aborted) return
        const planned = { document: read.document, design: read.design, plan, origin }
        planning.set({ ...initial, planned, status: 'current', at: new Date().toISOString() })
      },
      (error: unknown) => {
        if (signal.aborted) return
        planning.set((state) =>
          error instanceof PlanRefused
            ? { ...state, status: 'refused', faults: error.faults, message: null }
            : { ...state, status: 'failed', message: error instanceof Error ? error.message : String(error) },
        )
      },
    )
  }

  draft.subscribe(update)
  update()
  return {
    draft,
    planning,
    retry() {
      seen = null
      update()
    },
  }
}
