import { parentPort } from 'node:worker_threads'
import type { EngineAnswers, EngineJob, EngineReply } from './messages.ts'

type JobOf<K extends EngineJob['kind']> = Extract<EngineJob, { kind: K }>

/** What a worker can do: some of the kinds of jobs. */
type Skills = { [K in EngineJob['kind']]?: (job: JobOf<K>) => EngineAnswers[K] | Promise<EngineAnswers[K]> }

/** Answers each job that comes in, by its kind; an error goes back as text. */
export function answerJobs(skills: Skills): void {
  const answer = async (job: EngineJob): Promise<EngineAnswers[EngineJob['kind']]> => {
    // The cast: the key and the job's kind are the same literal.
    const skill = skills[job.kind] as ((job: EngineJob) => EngineAnswers[EngineJob['kind']]) | undefined
    if (!skill) throw new RangeError(`This worker makes no ${job.kind}`)
    return skill(job)
  }
  parentPort?.on('message', (job: EngineJob) => {
    answer(job).then(
      (value) => parentPort?.postMessage({ ok: true, value } satisfies EngineReply),
      (error: unknown) => {
        const { message, stack } = error instanceof Error ? error : new Error(String(error))
        parentPort?.postMessage({ ok: false, message, stack } satisfies EngineReply)
      },
    )
  })
}
