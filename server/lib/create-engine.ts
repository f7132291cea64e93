import type { Fault } from '#shared/design/plan.ts'
import { readDesign } from '#shared/design/read.ts'
import { AppError } from '#shared/errors.ts'
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

/** Designs are read at once; planning and notes go to worker threads. */
export function createEngine(isDemo: boolean, pool = new EnginePool()): Engine {
  return {
    isDemo,
    read(design) {
      const read = readDesign(design)
      if (!read.ok) throw designRefused(read.faults)
      return read.document
    },
    plan: (document) => pool.run({ kind: 'plan', document }),
    note: async (document, context) => Buffer.from(await pool.run({ kind: 'note', document, context })),
    close: () => pool.close(),
  }
}
