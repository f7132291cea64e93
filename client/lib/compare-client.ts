import type { DraftDocument } from '#shared/design/document-paths.ts'
import type { Plan } from '#shared/design/plan.ts'
import type { Comparison } from '#shared/studies/compare.ts'
import { runJob, type JobOptions, type JobPort } from './one-job.ts'

export interface CompareRequest {
  kept: DraftDocument
  now: DraftDocument
}

/** Edits tried alone, of how many. */
export interface CompareProgress {
  done: number
  of: number
}

export interface ComparedVariants {
  comparison: Comparison
  kept: Plan
  now: Plan
}

const openWorker = (): JobPort<CompareRequest, CompareProgress, ComparedVariants> =>
  new Worker(new URL('./compare-worker.ts', import.meta.url), { type: 'module', name: 'compare' })

/** Plans two variants and tries each edit between them alone, away from the page's thread. */
export const compareInWorker = (
  request: CompareRequest,
  options: JobOptions<CompareProgress> = {},
  openPort = openWorker,
): Promise<ComparedVariants> => runJob(openPort, request, options)
