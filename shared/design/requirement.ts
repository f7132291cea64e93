import type { Need } from '#shared/amplifiers/define.ts'
import { kindOf } from '#shared/sensors/index.ts'
import { sensorContext } from './chain.ts'
import type { Ends } from './plan.ts'
import { resolveReferences } from './references.ts'
import type { Design } from './schema.ts'

/** What is asked of the chain as a whole, before any arrangement is looked at. */
export interface Requirement {
  signal: Ends
  /** Readings that must stay distinguishable, V; null where there are none. */
  beyond: Ends | null
  need: Omit<Need, 'target'>
}

export function requirementOf(design: Design): Requirement {
  const signal = kindOf(design.sensor).signal(design.sensor, sensorContext(design))
  const { shift } = resolveReferences(design)
  return {
    signal: signal.ends,
    beyond: signal.beyond,
    need: {
      signal: signal.ends,
      differential: signal.differential,
      commonMode: signal.commonMode,
      sourceResistance: signal.sourceResistance,
      floating: signal.floating,
      reference: shift && {
        voltage: shift.voltage,
        resistance: shift.resistance,
        buffered: shift.buffered,
      },
      rails: { positive: design.rails.positive, negative: design.rails.negative },
      parts: design.parts,
      level: design.choose.stages?.find((s) => s.ref === 'S1')?.reference ?? null,
    },
  }
}
