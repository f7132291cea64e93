import { join, sep } from 'node:path'
import { pathToFileURL } from 'node:url'
import { Worker } from 'node:worker_threads'
import { AppError } from '#shared/errors.ts'
import { findRoot } from '#server/lib/root.ts'
import type { EngineAnswers, EngineJob, EngineReply } from './messages.ts'

interface Waiting {
  job: EngineJob
  resolve: (value: never) => void
  reject: (error: unknown) => void
}

interface PoolOptions {
  /** Jobs at once. */
  workers?: number
  /** Jobs that may wait; the next one is told to come back. */
  queue?: number
  /** Milliseconds after which a job is given up. */
  timeout?: number
  /** Which worker: the file's name without its ending. */
  script?: 'engine-worker' | 'check-worker'
  /** Milliseconds after which a worker without work is ended; Infinity: it stays. */
  idle?: number
}

/** From the built server the built worker; from the sources the source, through the TypeScript loader. */
function startWorker(script: string): Worker {
  const isBuilt = import.meta.dirname.includes(`${sep}dist${sep}server`)
  const folder = join(findRoot(), isBuilt ? 'dist/server' : 'server/workers')
  const source = pathToFileURL(join(folder, `${script}.ts`)).href
  // Without it the libraries that set the note check their own use at every step, several times slower.
  const env = { ...process.env, NODE_ENV: 'production' }
  const worker = isBuilt
    ? new Worker(join(folder, `${script}.js`), { env })
    : new Worker(join(folder, 'from-source.mjs'), { env, workerData: { source } })
  worker.unref()
  return worker
}

const tooBusy = (): AppError =>
  new AppError('busy', 'Too many plans and notes are being made just now. Try again in a few seconds.', {
    retryAfter: 5,
  })

/** A few worker threads for what computes long, and a queue before them. Workers start when first needed. */
export class EnginePool {
  readonly #idle: Worker[] = []
  readonly #busy = new Set<Worker>()
  readonly #queue: Waiting[] = []
  readonly #resting = new Map<Worker, NodeJS.Timeout>()
  readonly #options: Required<PoolOptions>
  #isClosed = false

  constructor(options: PoolOptions = {}) {
    this.#options = {
      workers: 2,
      queue: 20,
      timeout: 60_000,
      script: 'engine-worker',
      idle: Infinity,
      ...options,
    }
  }

  run<J extends EngineJob>(job: J): Promise<EngineAnswers[J['kind']]> {
    return new Promise((resolve, reject) => {
      const isFull = this.#busy.size >= this.#options.workers && this.#queue.length >= this.#options.queue
      if (this.#isClosed || isFull) {
        reject(tooBusy())
        return
      }
      this.#queue.push({ job, resolve, reject })
      this.#next()
    })
  }

  /** Workers that are running, at work or not. */
  get size(): number {
    return this.#idle.length + this.#busy.size
  }

  async close(): Promise<void> {
    this.#isClosed = true
    for (const timer of this.#resting.values()) clearTimeout(timer)
    this.#resting.clear()
    for (const waiting of this.#queue.splice(0)) waiting.reject(tooBusy())
    await Promise.all([...this.#idle, ...this.#busy].map((worker) => worker.terminate()))
  }

  /** A worker that rests, if there is one. */
  #wake(): Worker | undefined {
    const worker = this.#idle.pop()
    if (!worker) return undefined
    clearTimeout(this.#resting.get(worker))
    this.#resting.delete(worker)
    return worker
  }

  #rest(worker: Worker): void {
    this.#idle.push(worker)
    if (!Number.isFinite(this.#options.idle)) return
    const end = (): void => {
      this.#resting.delete(worker)
      this.#idle.splice(this.#idle.indexOf(worker), 1)
      void worker.terminate()
    }
    this.#resting.set(worker, setTimeout(end, this.#options.idle).unref())
  }

  #next(): void {
    if (this.#busy.size >= this.#options.workers) return
    const waiting = this.#queue.shift()
    if (!waiting) return
    const worker = this.#wake() ?? startWorker(this.#options.script)
    this.#busy.add(worker)
    const timer = setTimeout(
      () =>
        leave(
          new AppError('busy', 'This design takes too long to plan. Fix more of its values and try again.'),
        ),
      this.#options.timeout,
    )
    /** A worker that failed or took too long is not used again. */
    const leave = (error: unknown): void => {
      finish()
      void worker.terminate()
      waiting.reject(error)
      this.#next()
    }
    const onExit = (code: number): void => leave(new Error(`The engine's worker ended with code ${code}.`))
    const onMessage = (reply: EngineReply): void => {
      finish()
      this.#rest(worker)
      if (reply.ok) waiting.resolve(reply.value as never)
      else {
        const cause = new Error(reply.message)
        if (reply.stack !== undefined) cause.stack = reply.stack
        waiting.reject(new Error('The engine failed.', { cause }))
      }
      this.#next()
    }
    const finish = (): void => {
      clearTimeout(timer)
      this.#busy.delete(worker)
      worker.off('error', leave).off('exit', onExit).off('message', onMessage)
    }
    worker.on('error', leave).on('exit', onExit).on('message', onMessage)
    worker.postMessage(waiting.job)
  }
}
