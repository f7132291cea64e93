import { renderNote } from '#server/documents/render-note.ts'
import { planDesign } from '#shared/design/plan-design.ts'
import { withCheck } from '#shared/studies/check.ts'
import { answerJobs } from './answer-jobs.ts'

/* Planning takes up to seconds and a note some tenths of one, both without a pause: they run here, beside the server. */

answerJobs({
  plan: ({ document }) => planDesign(document),
  async note({ document, context, check }) {
    const plan = withCheck(planDesign(document), check)
    return new Uint8Array(await renderNote({ document, plan, context }))
  },
})
