import { z } from 'zod'
import type { Plan } from '#shared/design/plan.ts'
import { endpoint } from './endpoint.ts'

/** The body is the design itself. What is wrong with it comes back as faults (422), not as an invalid request. */
export const designBodySchema = z.custom<Record<string, unknown>>(
  (value) => typeof value === 'object' && value !== null && !Array.isArray(value),
  'Send the design as a JSON object.',
)

/** One thing wrong with a design, as it comes back beside the error `design_refused`. */
export const faultsSchema = z.object({
  faults: z.array(z.object({ path: z.string(), reason: z.string(), accepted: z.string() })),
})

export const planApi = {
  /** Needs no account and stores nothing. */
  create: endpoint({
    method: 'POST',
    path: '/api/plan',
    access: 'public',
    computes: true,
    /** `check=true`: with the independent check in the simulator, a second or two later. */
    query: z.strictObject({ check: z.enum(['true', 'false']).default('false') }),
    body: designBodySchema,
    response: z.custom<Plan>((value) => typeof value === 'object' && value !== null),
  }),
}
