import type { IndependentCheck } from '#shared/design/plan.ts'
import { runJob, type JobOptions, type JobPort } from './one-job.ts'

export interface CheckRequest {
  document: unknown
  /** Place of the candidate in the design's plan. */
  candidate: number
}

/** How far it is: the simulator's bytes (`of` null where the server does not say how many), then its runs. */
export type CheckProgress =
  { stage: 'loading'; done: number; of: number | null } | { stage: 'running'; done: number; of: number }

const openWorker = (): JobPort<CheckRequest, CheckProgress, IndependentCheck> =>
  new Worker(new URL('./check-worker.ts', import.meta.url), { type: 'module', name: 'check' })

/**
 * Checks one candidate of a design's plan in the independent simulator, which is fetched now and only now. Each check
 * has a worker of its own that ends with it: the simulator takes 330 MB. Rejects with `PlanRefused` where the document
 * is not a design, and with an AbortError when stopped.
 */
export const runCheck = (
  document: unknown,
  candidate: number,
  options: JobOptions<CheckProgress> = {},
  openPort = openWorker,
): Promise<IndependentCheck> => runJob(openPort, { document, candidate }, options)
