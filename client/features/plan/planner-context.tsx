import { createContext, use } from 'react'
import type { Candidate, Fault } from '#shared/design/plan.ts'
import type { DraftAction, DraftState } from './draft/draft-state.ts'
import type { PlanState } from './session/plan-session.ts'
import type { ShownFinding } from './words/findings.ts'
import type { StepId } from './words/steps.ts'

export interface Quantity {
  name: string
  unit: string
}

/** All that the parts of the planner share: the draft, its plan, and the ways around. */
export interface PlannerValue {
  state: DraftState
  dispatch(action: DraftAction): void
  planning: PlanState
  /** Candidate that the plan stands on; null where there is none. */
  candidate: Candidate | null
  /** Its place in the plan's list. */
  chosen: number | null
  findings: readonly ShownFinding[]
  /** Faults of values that stand in a field, by path. */
  faults: ReadonlyMap<string, Fault>
  sensorKind: string
  quantity: Quantity
  /** The levels shown belong to an older state of the draft. */
  stale: boolean
  /** Why fields cannot be edited; null where they can. */
  readOnly: string | null
  /** Node of the level diagram whose fields are being edited. */
  editing: string | null
  setEditing(node: string | null): void
  step: StepId | null
  stepHref(step: StepId): string
  /** Leads to the field of a path, on whichever step it stands. */
  goTo(path: string): void
  retry(): void
  where: PlanPlace
}

/** Where the work is kept. */
export type PlanPlace =
  { kind: 'visitor' } | { kind: 'channel'; workspaceId: string; projectId: string; channelId: string }

const PlannerContext = createContext<PlannerValue | null>(null)

export const PlannerProvider = PlannerContext.Provider

export function usePlanner(): PlannerValue {
  const value = use(PlannerContext)
  if (!value) throw new Error('This part belongs inside the planner.')
  return value
}
