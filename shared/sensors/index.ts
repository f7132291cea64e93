import { z } from 'zod'
import { bridge } from './kinds/bridge.ts'
import type { SensorKind } from './kinds/define.ts'
import { voltage } from './kinds/voltage.ts'

/** The only list of sensor kinds: schema, picker, form and tests follow from it. */
export const sensorKinds = [voltage, bridge] as const

export const sensorSchema = z.discriminatedUnion('kind', [voltage.schema, bridge.schema])
export type Sensor = z.output<typeof sensorSchema>

/** The kind object that answers for a sensor. */
export function kindOf(sensor: Sensor): SensorKind {
  const found = sensorKinds.find((kind) => kind.kind === sensor.kind)
  if (!found) throw new RangeError(`unknown sensor kind ${sensor.kind}`)
  // Each kind only ever receives sensors that its own schema has parsed; the list type forgets which.
  return found as unknown as SensorKind
}
