import type { Design, Reference } from './schema.ts'

/** A reference voltage with what is uncertain in it. Volts, ohms, amperes. */
export interface ResolvedReference {
  voltage: number
  /** Limit ± as a fraction, over temperature and the calibration interval. */
  spread: number
  resistance: number
  source: number
  sink: number
  /** May stand at a reference leg as it is. */
  buffered: boolean
  /** The uncertain quantity that moves it: two uses of one reference share it. */
  variable: string
}

export interface References {
  /** Scales the converter's codes; null where the design names none. */
  converter: ResolvedReference | null
  /** Makes the offset; null where there is neither a shift reference nor a converter reference. */
  shift: ResolvedReference | null
}

/** Largest distance of the electronics' temperature from 25 °C, K. */
export function temperatureSpan(design: Design): number {
  return Math.max(Math.abs(design.temperature.low - 25), Math.abs(design.temperature.high - 25))
}

/**
 * Resolves which references there are and which are one and the same. `same: 'positive'` is the positive rail,
 * `same: 'converter'` the converter's reference, so that their errors cancel where they meet.
 */
export function resolveReferences(design: Design): References {
  const span = temperatureSpan(design)
  const resolve = (
    given: Omit<Reference, 'voltage'> & { voltage: number },
    own: string,
  ): ResolvedReference => {
    const rail = given.same === 'positive'
    return {
      voltage: given.voltage,
      spread: rail
        ? design.rails.tolerance
        : given.tolerance + given.drift * span + given.ageing * design.calibration.interval,
      resistance: given.outputResistance,
      source: given.source,
      sink: given.sink,
      buffered: given.buffered,
      variable: rail ? 'positiveRail' : own,
    }
  }
  const ownReference = design.converter.reference
  const converter = ownReference ? resolve(ownReference, 'converterReference') : null
  const given = design.shiftReference
  if (!given || given.same === 'converter') return { converter, shift: converter }
  const voltage = given.same === 'positive' ? design.rails.positive : given.voltage
  if (voltage === undefined) return { converter, shift: converter }
  return { converter, shift: resolve({ ...given, voltage }, 'shiftReference') }
}
