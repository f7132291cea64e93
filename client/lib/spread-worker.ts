import { planDesign, prepareCandidate } from '#shared/design/plan-design.ts'
import { DesignRefused } from '#shared/design/read.ts'
import { spreadSteps } from '#shared/studies/spread.ts'
import type { Spread } from '#shared/studies/types.ts'
import { serveJob } from './one-job.ts'
import type { SpreadRequest } from './spread-client.ts'

/** Ten times a second is as often as a drawing that moves can be read, ms. */
const PACE = 100

serveJob<SpreadRequest, Spread, Spread>(
  ({ document, candidate, boards, seed }, tell) => {
    const chosen = planDesign(document).candidates[candidate]
    const prepared = chosen ? prepareCandidate(document, chosen) : null
    if (!prepared) throw new Error('There is no circuit to build boards of for this arrangement.')
    const steps = spreadSteps(prepared, { boards, seed })
    let told = performance.now()
    for (;;) {
      const step = steps.next()
      if (step.done === true) return step.value
      const now = performance.now()
      if (now - told < PACE) continue
      told = now
      tell(step.value)
    }
  },
  (error) => (error instanceof DesignRefused ? error.faults : null),
)
