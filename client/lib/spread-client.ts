import type { Spread } from '#shared/studies/types.ts'
import { runJob, type JobOptions, type JobPort } from './one-job.ts'

export interface SpreadRequest {
  document: unknown
  /** Place of the candidate in the design's plan. */
  candidate: number
  boards: number
  seed: number
}

const openWorker = (): JobPort<SpreadRequest, Spread, Spread> =>
  new Worker(new URL('./spread-worker.ts', import.meta.url), { type: 'module', name: 'spread' })

/** Builds the boards of one candidate at random, away from the page's thread; progress is what there is by then. */
export const runSpreadInWorker = (
  request: SpreadRequest,
  options: JobOptions<Spread> = {},
  openPort = openWorker,
): Promise<Spread> => runJob(openPort, request, options)
