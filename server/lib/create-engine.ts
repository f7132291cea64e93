import type { Fault, IndependentCheck } from '#shared/design/plan.ts'
import { readDesign } from '#shared/design/read.ts'
import type { DesignDocument } from '#shared/design/schema.ts'
import { AppError } from '#shared/errors.ts'
import { unanswered, withCheck } from '#shared/studies/check.ts'
import { EnginePool } from '#server/workers/engine-pool.ts'
import type { Engine } from './engine.ts'

/** The refusal of a design, with one fault for each thing that is wrong. */
function designRefused(faults: Fault[]): AppError {
  const count = faults.length === 1 ? 'One thing' : `${faults.length} things`
  return new AppError(
    'design_refused',
    `${count} in the design must be put right before it can be planned.`,
    {
      details: { faults },
    },
  )
}

/** Milliseconds that the simulator stays ready after the last check; it takes 330 MB. */
const CHECK_IDLE = 60_000

const checkPool = () => new EnginePool({ script: 'check-worker', workers: 1, idle: CHECK_IDLE })

/** Designs are read at once; planning, checks and notes go to worker threads. */
export function createEngine(isDemo: boolean, pool = new EnginePool(), checks = checkPool()): Engine {
  /** Someone in need of a note gets it where the simulator failed too; it then says that nothing was compared. */
  const check = async (document: DesignDocument): Promise<IndependentCheck | null> => {
    try {
      return await checks.run({ kind: 'check', document })
    } catch (error) {
      if (error instanceof AppError) throw error
      return unanswered
    }
  }
  return {
    isDemo,
    read(design) {
      const read = readDesign(design)
      if (!read.ok) throw designRefused(read.faults)
      return read.document
    },
    plan: (document) => pool.run({ kind: 'plan', document }),
    async checkedPlan(document) {
      const [plan, found] = await Promise.all([pool.run({ kind: 'plan', document }), check(document)])
      return withCheck(plan, found)
    },
    async note(document, context) {
      const found = await check(document)
      return Buffer.from(await pool.run({ kind: 'note', document, context, check: found }))
    },
    async close() {
      await Promise.all([pool.close(), checks.close()])
    },
  }
}
