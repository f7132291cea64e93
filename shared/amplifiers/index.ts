import type { Arrangement } from './define.ts'
import { difference } from './kinds/difference.ts'
import { twoAmplifier, threeAmplifier } from './kinds/instrumentation.ts'
import { integratedInstrumentation } from './kinds/integrated.ts'
import { inverting, invertingDown, invertingUp } from './kinds/inverting.ts'
import { nonInverting, nonInvertingDown, nonInvertingUp } from './kinds/non-inverting.ts'
import { attenuator, direct, follower, levelShift } from './kinds/passive.ts'
import { weightedDifference } from './kinds/weighted-difference.ts'

/** The only list of arrangements, in the order in which equal candidates are shown. */
export const arrangements: readonly Arrangement[] = [
  direct,
  follower,
  attenuator,
  levelShift,
  nonInverting,
  nonInvertingUp,
  nonInvertingDown,
  weightedDifference,
  inverting,
  invertingUp,
  invertingDown,
  ...integratedInstrumentation,
  ...difference,
  ...twoAmplifier,
  ...threeAmplifier,
]
