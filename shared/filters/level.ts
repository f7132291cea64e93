import type { Reason } from '#shared/design/plan.ts'
import type { Design } from '#shared/design/schema.ts'
import { formatQuantity } from '#shared/units/format-quantity.ts'
import type { FilterLevel } from './filter-spec.ts'
import { capacitorValues, closest, resistorValues } from './rc.ts'

/** The reference that levels are made from: V, and its output resistance, Ω. */
export interface LevelSource {
  voltage: number
  resistance: number
}

/** Bypass of the level, F; it only keeps noise out, so the nearest allowed value does. */
const BYPASS = 1e-7

/**
 * The level about which inverting sections turn the signal over: the middle of what the converter is to see, so that
 * the signal keeps its place. Made from the shift reference by a divider (R10, R11, bypassed by C10), or ground or the
 * reference itself where that is the middle.
 */
export function sizeLevel(design: Design, reference: LevelSource | null): FilterLevel | { reason: Reason } {
  const volts = middle(design)
  const { low, high } = design.converter.input
  const near = 1e-6 * (high - low)
  if (Math.abs(volts) <= near) return { kind: 'ground' }
  if (!reference)
    return refused(
      volts,
      `Inverting filter sections need a level of ${say(volts)}: give the converter a reference, or a shift reference of its own; or take sallen-key sections.`,
    )
  if (Math.abs(volts - reference.voltage) <= near) return { kind: 'reference' }
  if (volts < 0 || volts > reference.voltage)
    return refused(
      volts,
      `Inverting filter sections need a level of ${say(volts)}; a divider gives more than 0 V and less than the ${say(reference.voltage)} of the reference. Take another shift reference, or sallen-key sections.`,
    )
  return divider(design, volts, reference)
}

function refused(level: number, text: string): { reason: Reason } {
  return { reason: { code: 'filter-level', text, numbers: { level } } }
}

const say = (volts: number) => formatQuantity(volts, 'V', { digits: 4 })

/** Voltage at the + inputs as the parts give it, V. */
export function levelVoltage(reference: LevelSource | null, level: FilterLevel): number {
  if (level.kind === 'ground' || !reference) return 0
  if (level.kind === 'reference') return reference.voltage
  const { upper, lower } = level
  return (reference.voltage * lower) / (reference.resistance + upper + lower)
}

/** Middle of the converter's range less the guard bands that are stated, V. */
function middle({ converter }: Design): number {
  const { low, high } = converter.input
  const guard = converter.guard ?? { low: 0, high: 0 }
  return (low + high + (guard.low - guard.high) * (high - low)) / 2
}

/** The pair nearest to the level; of equally near ones that nearest to the preferred resistance. */
function divider(design: Design, volts: number, { voltage, resistance }: LevelSource): FilterLevel {
  const list = resistorValues(design)
  const { preferred } = design.parts.resistors
  const fixed = design.choose.values ?? {}
  const uppers = fixed.R10 === undefined ? list : [fixed.R10]
  let best = { upper: 0, lower: 0, error: Infinity, away: Infinity }
  for (const upper of uppers) {
    const wanted = (volts * (resistance + upper)) / (voltage - volts)
    const lower = fixed.R11 ?? closest(wanted, list)
    const error = Math.abs((voltage * lower) / (resistance + upper + lower) - volts)
    const away = Math.abs(Math.log(upper / preferred)) + Math.abs(Math.log(lower / preferred))
    const same = Math.abs(error - best.error) <= 1e-9 * voltage
    if (same ? away < best.away : error < best.error) best = { upper, lower, error, away }
  }
  const bypass = fixed.C10 ?? closest(BYPASS, capacitorValues(design))
  return { kind: 'divider', upper: best.upper, lower: best.lower, bypass }
}
