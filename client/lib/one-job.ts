import type { Fault } from '#shared/design/plan.ts'
import { PlanRefused } from './plan-client.ts'

/** What a worker with one job says: how far it is, and once how it ended. */
export type JobMessage<Progress, Result> =
  | { kind: 'progress'; progress: Progress }
  | { kind: 'done'; result: Result }
  | { kind: 'refused'; faults: Fault[] }
  | { kind: 'failed'; message: string }

/** As much of a worker as is used here; tests hand in their own. */
export interface JobPort<Request, Progress, Result> {
  postMessage(message: Request): void
  onmessage: ((event: MessageEvent<JobMessage<Progress, Result>>) => void) | null
  onerror: ((event: ErrorEvent) => void) | null
  terminate(): void
}

export interface JobOptions<Progress> {
  signal?: AbortSignal
  onProgress?: (progress: Progress) => void
}

/**
 * Runs one long job in a worker of its own that ends with it, whether it is done, fails or is stopped: a worker that
 * computes cannot hear that it should stop. Rejects with `PlanRefused` where the document is not a design, and with an
 * AbortError when stopped.
 */
export function runJob<Request, Progress, Result>(
  openPort: () => JobPort<Request, Progress, Result>,
  request: Request,
  { signal, onProgress }: JobOptions<Progress> = {},
): Promise<Result> {
  return new Promise((resolve, reject) => {
    const stopped = () => new DOMException('The calculation was stopped.', 'AbortError')
    if (signal?.aborted) {
      reject(stopped())
      return
    }
    const port = openPort()
    const end = (say: () => void) => {
      signal?.removeEventListener('abort', stop)
      port.terminate()
      say()
    }
    const stop = () => end(() => reject(stopped()))
    signal?.addEventListener('abort', stop)
    port.onerror = (event) =>
      end(() => reject(new Error(event.message || 'The calculation stopped unexpectedly.')))
    port.onmessage = ({ data }) => {
      if (data.kind === 'progress') onProgress?.(data.progress)
      else if (data.kind === 'done') end(() => resolve(data.result))
      else if (data.kind === 'refused') end(() => reject(new PlanRefused(data.faults)))
      else end(() => reject(new Error(data.message)))
    }
    port.postMessage(request)
  })
}

/** What is used of a worker's global scope; its full type would need another set of libraries than the page's. */
interface WorkerScope<Request, Progress, Result> {
  onmessage: ((event: MessageEvent<Request>) => void) | null
  postMessage(message: JobMessage<Progress, Result>): void
}

/** The worker's side: answers its one request; what is thrown becomes its answer. */
export function serveJob<Request, Progress, Result>(
  work: (request: Request, tell: (progress: Progress) => void) => Result | Promise<Result>,
  toFaults: (error: unknown) => Fault[] | null,
): void {
  const scope = globalThis as unknown as WorkerScope<Request, Progress, Result>
  const answer = async (request: Request): Promise<JobMessage<Progress, Result>> => {
    try {
      const result = await work(request, (progress) => scope.postMessage({ kind: 'progress', progress }))
      return { kind: 'done', result }
    } catch (error) {
      const faults = toFaults(error)
      if (faults) return { kind: 'refused', faults }
      return { kind: 'failed', message: error instanceof Error ? error.message : 'The calculation failed.' }
    }
  }
  scope.onmessage = ({ data }) => void answer(data).then((message) => scope.postMessage(message))
}
