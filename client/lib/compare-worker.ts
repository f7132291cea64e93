import { planDesign } from '#shared/design/plan-design.ts'
import { DesignRefused } from '#shared/design/read.ts'
import { compareVariants } from '#shared/studies/compare.ts'
import type { ComparedVariants, CompareProgress, CompareRequest } from './compare-client.ts'
import { serveJob } from './one-job.ts'

serveJob<CompareRequest, CompareProgress, ComparedVariants>(
  ({ kept, now }, tell) => {
    const before = planDesign(kept)
    const after = planDesign(now)
    const comparison = compareVariants(
      { document: kept, plan: before },
      { document: now, plan: after },
      { onProgress: (done, of) => tell({ done, of }) },
    )
    return { comparison, kept: before, now: after }
  },
  (error) => (error instanceof DesignRefused ? error.faults : null),
)
