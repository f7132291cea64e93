import { planDesign } from '#shared/design/plan-design.ts'
import type { Candidate, Plan } from '#shared/design/plan.ts'

/** The chosen candidate with every section that a chosen one has. */
export type Chosen = Required<Omit<Candidate, 'stages' | 'optimum'>> & Pick<Candidate, 'stages' | 'optimum'>

/** The candidate that a plan takes. */
export function chosenOf(plan: Plan): Chosen {
  const candidate = plan.chosen === null ? undefined : plan.candidates[plan.chosen]
  if (!candidate?.realised || !candidate.findings)
    throw new Error(`nothing was chosen: ${JSON.stringify(plan.candidates.map((c) => c.reasons))}`)
  return candidate as Chosen
}

/** Plans a document and gives what it takes. */
export const planChosen = (document: unknown): Chosen => chosenOf(planDesign(document))

/** Value of a part in the parts list, Ω or F. */
export function valueOf(candidate: Candidate, ref: string): number {
  const value = candidate.components?.find((c) => c.ref === ref)?.value
  if (value === undefined) throw new Error(`there is no ${ref}`)
  return value
}
