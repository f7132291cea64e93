import { arrangements } from '#shared/amplifiers/index.ts'
import { readDesign } from '#shared/design/read.ts'
import type { Design } from '#shared/design/schema.ts'
import { trySingle } from '#shared/design/plan-stage.ts'
import type { Trial, TrialResult } from '#shared/design/settle.ts'
import { splitsFor, tryTwo } from '#shared/design/plan-two-stages.ts'

/** A document with its defaults; throws with every fault where it is refused. */
export function parseDesign(document: unknown): Design {
  const read = readDesign(document)
  if (!read.ok) throw new Error(read.faults.map((f) => `${f.path}: ${f.reason}`).join('\n'))
  return read.design
}

/** The chain that a design makes of an arrangement, or of the first split of two (`first+second`) that exists. */
export function buildTrial(design: Design, id: string): Trial {
  const results: TrialResult[] = id.includes('+')
    ? splitsFor({ ...design, choose: { ...design.choose, arrangement: id } }, true).map((split) =>
        tryTwo(design, split, 'nominal'),
      )
    : arrangements.filter((a) => a.id === id).map((a) => trySingle(design, a))
  for (const result of results) if (result.ok) return result.trial
  throw new Error(`${id} does not exist for this design`)
}
