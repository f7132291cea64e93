import type { Chain } from '#shared/design/chain.ts'
import type { OverVoltage, RoomState } from '#shared/design/plan.ts'
import type { Design } from '#shared/design/schema.ts'

/**
 * What the converter's pin can see when things go wrong: the last amplifier saturated at each rail (rails at their
 * limits), the same with the converter's supply off, and miswiring of a sensor that reaches the pin without an
 * amplifier. Clamp current = excess / series resistance (common practice). Empty where the design gives no
 * absolute limits. V, A.
 */
export function checkOverVoltage(design: Design, chain: Chain, filterResistance: number): OverVoltage[] {
  const { absolute } = design.converter
  if (!absolute) return []
  const { rails } = design
  const reach = (v: number) => Math.abs(v) * rails.tolerance + rails.ripple
  const top = rails.positive + reach(rails.positive)
  const bottom = rails.negative - reach(rails.negative)
  const driven = chain.network.elements.some((e) => e.kind === 'amplifier')
  const entry = (name: string, volts: number, limits: { low: number; high: number }): OverVoltage => {
    const excess = Math.max(volts - limits.high, limits.low - volts, 0)
    const clampCurrent = excess === 0 ? 0 : filterResistance > 0 ? excess / filterResistance : null
    const state: RoomState =
      excess === 0
        ? 'clear'
        : clampCurrent !== null && clampCurrent <= absolute.clampCurrent
          ? 'tight'
          : 'over'
    return {
      case: name,
      pinVolts: { low: volts, high: volts },
      allowed: limits,
      clampCurrent,
      clampLimit: absolute.clampCurrent,
      state,
    }
  }
  const on = { low: absolute.low, high: absolute.high }
  const list: OverVoltage[] = []
  if (driven) {
    list.push(entry('Last amplifier at the positive rail', top, on))
    list.push(entry('Last amplifier at the negative rail', bottom, on))
    if (design.converter.supply !== undefined) {
      // Without its supply the pin may rise only as far above 0 V as it otherwise may above that supply.
      const off = { low: absolute.low, high: absolute.high - design.converter.supply }
      list.push(entry('Converter supply off, amplifier at the positive rail', top, off))
    }
  } else if (design.sensor.kind === 'voltage' && design.sensor.fault) {
    list.push(entry('Miswired sensor, highest', design.sensor.fault.high, on))
    list.push(entry('Miswired sensor, lowest', design.sensor.fault.low, on))
  }
  return list
}
