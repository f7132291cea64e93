import { parentPort } from 'node:worker_threads'
import { renderNote } from '#server/documents/render-note.ts'
import { planDesign } from '#shared/design/plan-design.ts'
import type { EngineJob, EngineReply } from './messages.ts'

/* Planning takes up to seconds and a note some tenths of one, both without a pause: they run here, beside the server. */

async function answer(job: EngineJob): Promise<Extract<EngineReply, { ok: true }>['value']> {
  const plan = planDesign(job.document)
  if (job.kind === 'plan') return plan
  const bytes = await renderNote({ document: job.document, plan, context: job.context })
  return new Uint8Array(bytes)
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
