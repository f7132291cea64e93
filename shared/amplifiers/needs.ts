import type { Reason } from '#shared/design/plan.ts'
import { formatQuantity } from '#shared/units/format-quantity.ts'
import type { Need } from './define.ts'

export const signalEnds = (need: Need): [number, number] => [need.signal.low, need.signal.high]

/** Whether the design's amplifier may be run from its rails; null when it may. */
export function supplyReason(need: Need): Reason | null {
  const part = need.parts.amplifier
  return supplyFits(
    part.name,
    need.rails.positive - need.rails.negative,
    part.minimumSupply,
    part.maximumSupply,
  )
}

export function supplyFits(name: string, supply: number, minimum: number, maximum: number): Reason | null {
  const v = (x: number) => formatQuantity(x, 'V', { digits: 4 })
  if (supply < minimum)
    return {
      code: 'supply-low',
      text: `The rails give ${v(supply)}; ${name} needs at least ${v(minimum)}.`,
      numbers: { supply, minimum },
    }
  if (supply > maximum)
    return {
      code: 'supply-high',
      text: `The rails give ${v(supply)}; ${name} takes at most ${v(maximum)}.`,
      numbers: { supply, maximum },
    }
  return null
}

/** The reference that makes the offset, or why there is none. */
export function shiftReference(need: Need): NonNullable<Need['reference']> | { reason: Reason } {
  return (
    need.reference ?? {
      reason: {
        code: 'no-reference',
        text: 'The offset needs a reference voltage: give the converter a reference, or a shift reference of its own.',
        numbers: {},
      },
    }
  )
}
