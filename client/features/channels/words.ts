import type { Channel } from '#shared/api/channels.ts'
import type { Candidate, Fault, Level, Plan, RoomState } from '#shared/design/plan.ts'
import type { DesignDocument } from '#shared/design/schema.ts'
import { sensorKinds } from '#shared/sensors/index.ts'
import {
  formatOf,
  formatQuantity,
  formatRange,
  formatRoom,
  type DecimalSign,
} from '#shared/units/format-quantity.ts'

/** What the list says about a channel, from its document and its plan. Words and figures only, no markup. */

export const channelNumber = (channel: Pick<Channel, 'number'>): string =>
  String(channel.number).padStart(2, '0')

export interface RoomWords {
  state: RoomState
  text: string
  /** Least worst-case room as a fraction, for ordering; null where it is not known. */
  least: number | null
}

/** A draft may lack any of its sections. */
type Draft = Partial<DesignDocument>

export function sensorWords(document: Draft): string {
  const kind = sensorKinds.find((k) => k.kind === document.sensor?.kind)
  return kind ? kind.title.toLowerCase() : 'no sensor yet'
}

export function spanWords(document: Draft, decimalSign: DecimalSign = '.'): string {
  const quantity = document.sensor?.quantity
  if (!quantity || typeof quantity.low !== 'number' || typeof quantity.high !== 'number') return 'no span yet'
  return formatRange(quantity.low, quantity.high, quantity.unit ?? '', { unitOnce: true, decimalSign })
}

export const chosenOf = (plan: Plan): Candidate | null =>
  plan.chosen === null ? null : (plan.candidates[plan.chosen] ?? null)

const nodeWords = (node: string): string =>
  node === 'adc' ? 'converter' : node === 'sensor' ? 'sensor output' : node

/** "8.1 % above S2", "7.0 % both ways S2", "Clips at 5.016 m, converter": worst board, rounded inward. */
export function roomWords(plan: Plan, document: Draft, decimalSign: DecimalSign = '.'): RoomWords {
  const chosen = chosenOf(plan)
  if (!chosen?.levels || chosen.levels.length === 0)
    return { state: 'over', text: 'No arrangement works', least: null }
  const tightest = chosen.levels.reduce((a, b) => (leastOf(b) < leastOf(a) ? b : a))
  const least = leastOf(tightest)
  const state = chosen.levels.some((l) => l.state === 'over')
    ? 'over'
    : chosen.levels.some((l) => l.state === 'tight')
      ? 'tight'
      : tightest.state
  if (least < 0) return { state: 'over', text: clipWords(tightest, document, decimalSign), least }
  const [low, high] = [
    formatRoom(tightest.room.low, decimalSign),
    formatRoom(tightest.room.high, decimalSign),
  ]
  const side = low === high ? 'both ways' : tightest.room.high < tightest.room.low ? 'above' : 'below'
  const figure = side === 'above' ? high : low
  return { state, text: `${figure} ${side} ${nodeWords(tightest.node)}`, least }
}

const leastOf = (level: Level): number => Math.min(level.room.low, level.room.high)

function clipWords(level: Level, document: Draft, decimalSign: DecimalSign): string {
  const quantity = document.sensor?.quantity
  const end = level.room.high < level.room.low ? 'high' : 'low'
  const at = level.worstClipsAt[end] ?? level.clipsAt[end]
  if (at === null || !quantity) return `${formatRoom(leastOf(level), decimalSign)}, ${nodeWords(level.node)}`
  // Never printed wider than it is: towards the middle of the span.
  const rounding = at >= (quantity.low + quantity.high) / 2 ? 'down' : 'up'
  return `Clips at ${formatQuantity(at, quantity.unit ?? '', { rounding, decimalSign })}, ${nodeWords(level.node)}`
}

/** What stands between a draft and a plan, in a few words. */
export function openWords(faults: readonly Fault[]): string {
  const paths = faults.map((fault) => fault.path)
  if (paths.some((path) => path.startsWith('sensor'))) return 'No sensor and span yet'
  if (paths.some((path) => path.startsWith('converter'))) return 'No converter range yet'
  if (paths.some((path) => path.startsWith('rails'))) return 'No rails yet'
  return faults[0] ? `To be put right: ${faults[0].path}` : 'Not complete yet'
}

export interface ErrorWords {
  /** Expanded uncertainty in the measurand's unit; null where it is not known. */
  error: number | null
  target: number | null
  text: string
}

/**
 * Expanded uncertainty against the target, in the state that the target is stated for, else as built; in the measurand's
 * unit, rounded up.
 */
export function errorWords(plan: Plan | null, document: Draft, decimalSign: DecimalSign = '.'): ErrorWords {
  const quantity = document.sensor?.quantity
  const span = quantity ? Math.abs(quantity.high - quantity.low) : Number.NaN
  const limit = document.target?.limit
  const target =
    limit === undefined || !quantity ? null : document.target?.per === 'quantity' ? limit : limit * span
  const chosen = plan ? chosenOf(plan) : null
  const budget = chosen?.budget
  const error = budget ? budget.totals[budget.target?.state ?? 'asBuilt'].expanded / budget.perQuantity : null
  const figure = (value: number) =>
    formatQuantity(value, quantity?.unit ?? '', { digits: 2, rounding: 'up', zeros: 'keep', decimalSign })
  if (error === null)
    return { error, target, text: target === null ? 'not known' : `target ${figure(target)}` }
  return {
    error,
    target,
    text:
      target === null
        ? figure(error)
        : formatOf(error, target, quantity?.unit ?? '', { rounding: 'up', decimalSign }),
  }
}

/** Room that the channel's own rule keeps; 3 % where the draft says nothing. */
export const roomRule = (document: Draft): number => document.rules?.room ?? 0.03
