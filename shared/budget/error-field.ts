import {
  analyseSensitivities,
  type Sensitivity,
  type SensitivityPoint,
} from '#shared/analysis/sensitivity.ts'
import { buildChain, type Chain, type ChainSpec } from '#shared/design/chain.ts'
import type { NoiseSummary } from '#shared/design/plan.ts'
import type { Design } from '#shared/design/schema.ts'
import type { Network } from '#shared/network/types.ts'
import type { Condition, ErrorInput } from './error-input.ts'
import { errorInputs } from './error-inputs.ts'

/** What every input does to y at one measurand and common mode. */
export interface FieldPoint {
  quantity: number
  /** V; null in the middle of its range, or where there is none. */
  commonMode: number | null
  /** Nominal y, V. */
  y: number
  /** dy per unit of each input's amount, V, in order of the inputs. */
  slopes: Float64Array
}

/** Sensitivities of a chain over its span, and the conditions that it is looked at under. */
export interface ErrorField {
  inputs: ErrorInput[]
  /** Span, with the common mode at its middle and, where it moves, at both ends. */
  points: FieldPoint[]
  /** The two adjustment points, common mode at its middle. */
  adjusted: [FieldPoint, FieldPoint]
  conditions: Condition[]
  /** At which the adjustment is made. */
  calibration: Condition
  /** y at quantity.high less y at quantity.low, V. */
  span: number
}

/** Points of the span besides the adjustment points. */
const SHARES = [0, 0.25, 0.5, 0.75, 1]

/**
 * Sensitivities by the adjoint network at points of the span, each input's effects summed with their signs, so that what
 * is shared cancels by itself. Resistor mismatch and rejection act in proportion to the common mode: they are looked at
 * over its whole range, not in its middle alone.
 */
export function surveyErrors(design: Design, spec: ChainSpec, noise: NoiseSummary | null): ErrorField {
  const { quantity } = design.sensor
  const [first, second] = adjustmentPoints(design)
  const along = SHARES.map((share) => quantity.low + share * (quantity.high - quantity.low))
  const places = [...new Set([...along, first, second])]
  const points: FieldPoint[] = []
  const middles = new Map<number, FieldPoint>()
  let inputs: ErrorInput[] = []
  for (const place of places) {
    const chain = buildChain(design, spec, place)
    const found = surveyPlace(design, chain, place, noise)
    inputs = found.inputs
    const [middle] = found.points
    if (middle) middles.set(place, middle)
    if (along.includes(place)) points.push(...found.points)
  }
  const at = (place: number): FieldPoint => {
    const found = middles.get(place)
    if (!found) throw new RangeError(`no sensitivities were computed at ${place}`)
    return found
  }
  return {
    inputs,
    points,
    adjusted: [at(first), at(second)],
    conditions: conditionsOf(design),
    calibration: {
      temperature: design.temperature.calibration,
      sensorTemperature: design.temperature.calibration,
      years: 0,
    },
    span: at(quantity.high).y - at(quantity.low).y,
  }
}

/** Measurands of zero and span adjustment: as stated, absent the ends; one alone is joined by the end further off. */
export function adjustmentPoints(design: Design): [number, number] {
  const { low, high } = design.sensor.quantity
  const [first = low, second] = design.calibration.points
  if (second !== undefined && second !== first) return [first, second]
  return [first, Math.abs(high - first) >= Math.abs(first - low) ? high : low]
}

function conditionsOf(design: Design): Condition[] {
  const { temperature, sensor, calibration } = design
  const years = calibration.interval
  const { low, high, calibration: workshop } = temperature
  // An adjustment may be made at a temperature at which the channel never works.
  const within = workshop > low && workshop < high ? [workshop] : []
  const electronics = [...new Set([low, ...within, high])]
  if (!sensor.temperature) return electronics.map((t) => ({ temperature: t, sensorTemperature: t, years }))
  const own = [sensor.temperature.low, sensor.temperature.high]
  return electronics.flatMap((t) => own.map((s) => ({ temperature: t, sensorTemperature: s, years })))
}

function surveyPlace(
  design: Design,
  chain: Chain,
  quantity: number,
  noise: NoiseSummary | null,
): { inputs: ErrorInput[]; points: FieldPoint[] } {
  const { network } = chain
  const references = Object.fromEntries(chain.errors.map((e) => [e.ref, e.reference]))
  const middle = analyseSensitivities(network, { model: 'real', references })
  const inputs = errorInputs(design, chain, noise, middle.voltage)
  const wiring = wireInputs(network, inputs, middle.sensitivities)
  const toPoint = (found: SensitivityPoint, commonMode: number | null): FieldPoint => ({
    quantity,
    commonMode,
    y: found.output,
    slopes: Float64Array.from(inputs, (input, i) => {
      let slope = input.onOutput?.(found.output) ?? 0
      for (const { at, weight } of wiring[i] ?? [])
        slope += weight * (found.sensitivities[at]?.derivative ?? 0)
      return slope
    }),
  })
  const points = [toPoint(middle, null)]
  const moved = commonModeEnds(chain)
  if (moved) {
    const set = { [moved.ref]: moved.high }
    const high = toPoint(analyseSensitivities(network, { model: 'real', references, set }), moved.high)
    points.push(high, { ...mirrored(points[0]!, high), commonMode: moved.low })
  }
  return { inputs, points }
}

/** The other end of a common mode: voltages, and with them every sensitivity, are straight in it. */
function mirrored(middle: FieldPoint, end: FieldPoint): Omit<FieldPoint, 'commonMode'> {
  return {
    quantity: middle.quantity,
    y: 2 * middle.y - end.y,
    slopes: middle.slopes.map((slope, i) => 2 * slope - end.slopes[i]!),
  }
}

/** Where the effects of each input stand among the sensitivities, with what they are multiplied by. */
function wireInputs(
  network: Network,
  inputs: readonly ErrorInput[],
  sensitivities: readonly Sensitivity[],
): { at: number; weight: number }[][] {
  const places = new Map<string, number>()
  sensitivities.forEach((s, at) => places.set(s.ref + s.port, at))
  const values = new Map<string, number>()
  for (const e of network.elements)
    if ('value' in e) values.set(e.ref, e.value)
    else if ('gain' in e) values.set(e.ref, e.gain)
  return inputs.map(({ id, effects }) =>
    effects.map(({ ref, port, scale, relative }) => {
      const at = places.get(ref + port)
      const value = relative ? values.get(ref) : 1
      if (at === undefined || value === undefined)
        throw new RangeError(`${id} acts on ${ref} ${port}, which the network does not have`)
      return { at, weight: scale * value }
    }),
  )
}

/** Where and between what the common mode moves; null where there is none, or it stands still. */
function commonModeEnds(chain: Chain): { ref: string; low: number; high: number } | null {
  const variable = chain.variables.find(({ id }) => id === 'commonMode')
  const ref = variable?.injections[0]?.ref
  if (!variable || ref === undefined || variable.high <= variable.low) return null
  return { ref, low: variable.low, high: variable.high }
}
