import { openSimulator } from '#server/lib/simulator.ts'
import { planDesign } from '#shared/design/plan-design.ts'
import { checkChosen } from '#shared/studies/check.ts'
import { answerJobs } from './answer-jobs.ts'

/* The simulator takes some 330 MB: it has a worker of its own, which ends when nobody asked for a while. */

const simulator = openSimulator()

answerJobs({ check: ({ document }) => checkChosen(document, planDesign(document), simulator) })
