import type { Fault, Plan } from '#shared/design/plan.ts'
import type { Network } from '#shared/network/types.ts'
import type { Curves } from '#shared/studies/types.ts'
import type { PlanAnswer, PlanRequest } from './plan-messages.ts'

/** The document is not a design yet; `faults` name the fields. */
export class PlanRefused extends Error {
  override name = 'PlanRefused'
  readonly faults: Fault[]
  constructor(faults: Fault[]) {
    super(faults[0] ? `${faults[0].path}: ${faults[0].reason}` : 'The design was refused.')
    this.faults = faults
  }
}

/** As much of a worker as is used here; tests hand in their own. */
export interface PlanPort {
  postMessage(message: PlanRequest): void
  onmessage: ((event: MessageEvent<PlanAnswer>) => void) | null
  onerror: ((event: ErrorEvent) => void) | null
  terminate(): void
}

export interface PlanOptions {
  signal?: AbortSignal
}

interface Job {
  request: PlanRequest
  resolve(answer: PlanAnswer): void
  reject(error: unknown): void
}

type Question =
  { ask: 'plan'; document: unknown } | { ask: 'network' | 'curves'; document: unknown; candidate: number }

const abortError = () => new DOMException('A newer change replaced this one.', 'AbortError')

/**
 * One worker, one question at a time, in the order asked. A question whose signal is aborted is taken out of the
 * queue, or its answer dropped if it is already being worked on: whoever types aborts the question before the last.
 */
export function createPlanClient(openPort: () => PlanPort) {
  let port: PlanPort | null = null
  let nextId = 1
  let current: Job | null = null
  const queue: Job[] = []

  const close = () => {
    port?.terminate()
    port = null
  }

  const open = (): PlanPort => {
    const opened = openPort()
    opened.onmessage = (event) => {
      if (current?.request.id !== event.data.id) return
      const job = current
      current = null
      job.resolve(event.data)
      next()
    }
    opened.onerror = (event) => {
      const job = current
      current = null
      // A worker that failed may be in any state; the next question gets a new one.
      close()
      job?.reject(new Error(event.message || 'The calculation stopped unexpectedly.'))
      next()
    }
    return opened
  }

  const next = () => {
    if (current) return
    const job = queue.shift()
    if (!job) return
    current = job
    port ??= open()
    port.postMessage(job.request)
  }

  const ask = (question: Question, { signal }: PlanOptions): Promise<PlanAnswer> =>
    new Promise<PlanAnswer>((resolve, reject) => {
      if (signal?.aborted) {
        reject(abortError())
        return
      }
      const job: Job = { request: { ...question, id: nextId++ }, resolve, reject }
      signal?.addEventListener(
        'abort',
        () => {
          const waiting = queue.indexOf(job)
          if (waiting >= 0) queue.splice(waiting, 1)
          reject(abortError())
        },
        { once: true },
      )
      queue.push(job)
      next()
    })

  const refuse = (answer: PlanAnswer): never => {
    if (!answer.ok && 'faults' in answer) throw new PlanRefused(answer.faults)
    throw new Error(!answer.ok && 'message' in answer ? answer.message : 'The calculation gave no answer.')
  }

  return {
    async plan(document: unknown, options: PlanOptions = {}): Promise<Plan> {
      const answer = await ask({ ask: 'plan', document }, options)
      return answer.ok && 'plan' in answer ? answer.plan : refuse(answer)
    },
    async network(document: unknown, candidate: number, options: PlanOptions = {}): Promise<Network> {
      const answer = await ask({ ask: 'network', document, candidate }, options)
      return answer.ok && 'network' in answer ? answer.network : refuse(answer)
    },
    async curves(document: unknown, candidate: number, options: PlanOptions = {}): Promise<Curves> {
      const answer = await ask({ ask: 'curves', document, candidate }, options)
      return answer.ok && 'curves' in answer ? answer.curves : refuse(answer)
    },
  }
}

const shared = createPlanClient(
  () => new Worker(new URL('./plan-worker.ts', import.meta.url), { type: 'module', name: 'plan' }),
)

/** Plans a design away from the page's thread. Rejects with `PlanRefused` where the document is not a design. */
export const planInWorker = (document: unknown, options: PlanOptions = {}): Promise<Plan> =>
  shared.plan(document, options)

/** The circuit of one candidate of that design's plan, for the schematic. */
export const networkInWorker = (
  document: unknown,
  candidate: number,
  options: PlanOptions = {},
): Promise<Network> => shared.network(document, candidate, options)

/** Response, step, loops and noise of one candidate over frequency and time, for plots. */
export const curvesInWorker = (
  document: unknown,
  candidate: number,
  options: PlanOptions = {},
): Promise<Curves> => shared.curves(document, candidate, options)
