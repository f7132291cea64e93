import type { Fault, Plan } from '#shared/design/plan.ts'
import type { Network } from '#shared/network/types.ts'
import type { Curves } from '#shared/studies/types.ts'

/** What the page asks of the plan worker. */
export type PlanRequest =
  | { id: number; ask: 'plan'; document: unknown }
  | { id: number; ask: 'network' | 'curves'; document: unknown; candidate: number }

/** What comes back. A document that is not a design is an answer, not a failure. */
export type PlanAnswer =
  | { id: number; ok: true; plan: Plan }
  | { id: number; ok: true; network: Network }
  | { id: number; ok: true; curves: Curves }
  | { id: number; ok: false; faults: Fault[] }
  | { id: number; ok: false; message: string }
