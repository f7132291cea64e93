import { toCode } from '#shared/design/codes.ts'
import type { Candidate, Ends, Level } from '#shared/design/plan.ts'
import type { Converter } from '#shared/design/schema.ts'
import { rises } from './level-figures.ts'

/** What the transfer plot shows: measurand in its own unit, converter input in volts. */
export interface TransferInput {
  quantity: { name: string; unit: string; low: number; high: number }
  converter: Pick<Converter, 'input' | 'bits' | 'coding'>
  /** Converter input at quantity.low and quantity.high, real amplifiers: nominal, and over every board. */
  nominal: Ends
  worst: { low: Ends; high: Ends }
  /** Whole codes between the two ends. */
  codesUsed: number
  /** Linear region at the converter input, V. */
  region: Ends
  /** Measurand at which the chain leaves its linear range, at the smaller and the larger end; null: never. */
  linear: Ends<number | null>
  worstLinear: Ends<number | null>
}

/** Gathers it from a candidate; null where the plan has no levels or figures for it. */
export function transferOf(
  candidate: Candidate,
  quantity: TransferInput['quantity'],
  converter: TransferInput['converter'],
): TransferInput | null {
  const { realised, levels } = candidate
  const last = levels?.at(-1)
  if (!realised || !levels || !last) return null
  return {
    quantity,
    converter,
    nominal: realised.converter,
    worst: realised.worst,
    // Whole codes, never more than there are.
    codesUsed: Math.floor(realised.codesUsed),
    region: last.region,
    linear: linearSpan(levels, quantity, 'clipsAt'),
    worstLinear: linearSpan(levels, quantity, 'worstClipsAt'),
  }
}

/** The measurand between the first limits that any node meets, going up and going down. */
function linearSpan(
  levels: readonly Level[],
  quantity: Ends,
  which: 'clipsAt' | 'worstClipsAt',
): Ends<number | null> {
  const increasing = quantity.high >= quantity.low
  const ends: Ends<number[]> = { low: [], high: [] }
  for (const level of levels) {
    const upperAtHigh = rises(level) === increasing
    const { low, high } = level[which]
    if (high !== null) ends[upperAtHigh ? 'high' : 'low'].push(high)
    if (low !== null) ends[upperAtHigh ? 'low' : 'high'].push(low)
  }
  return {
    low: ends.low.length > 0 ? Math.max(...ends.low) : null,
    high: ends.high.length > 0 ? Math.min(...ends.high) : null,
  }
}

/** Nominal straight line through both ends, V, without any limit. */
export function voltsAt({ quantity, nominal }: TransferInput, value: number): number {
  return (
    nominal.low + ((nominal.high - nominal.low) * (value - quantity.low)) / (quantity.high - quantity.low)
  )
}

export interface TransferPoint {
  quantity: number
  volts: number
  code: number
  /** True where the chain has left its linear range: the voltage then stays where it left it. */
  clipped: boolean
}

/** What the firmware reads at a value of the measurand, nominal board. */
export function readTransfer(input: TransferInput, value: number): TransferPoint {
  const { low, high } = input.linear
  const held = Math.min(high ?? Infinity, Math.max(low ?? -Infinity, value))
  const volts = voltsAt(input, held)
  return { quantity: value, volts, code: toCode(input.converter, volts), clipped: held !== value }
}

/** Eleven points over the required span. */
export function transferTable(input: TransferInput): TransferPoint[] {
  const { low, high } = input.quantity
  return Array.from({ length: 11 }, (_, i) => {
    const value = low + ((high - low) * i) / 10
    // A rounding residue of the steps is no figure.
    return readTransfer(input, Math.abs(value) < 1e-12 * Math.max(Math.abs(low), Math.abs(high)) ? 0 : value)
  })
}
