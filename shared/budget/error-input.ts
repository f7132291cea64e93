import type { PortName } from '#shared/network/elements/element-kind.ts'
import type { Distribution } from '#shared/design/plan.ts'

/**
 * One uncertain input of a chain: ONE named variable, whatever it reaches. Budget, Monte Carlo and improvements read
 * the same list, so that they can never disagree about what is uncertain.
 *
 * Amount of the variable on a board: `x · factor`, with x drawn from ±limit by `distribution` once per board and
 * `factor` the condition it is looked at under (see `behaviour`).
 */
export interface ErrorInput {
  id: string
  label: string
  /** Part or input, as in the parts list: `R1`, `U1`, `shiftReference`, `sensor`, `converter`. */
  source: string
  /** Field of the design that sets the limit. */
  path: string | null
  /** Limit ± of x; per kelvin for `temperature`, per year for `ageing`. */
  limit: number
  unit: string
  distribution: Distribution
  /** constant: factor 1. temperature: kelvins from 25 °C (of the electronics or of the sensor). ageing: years since
   * the adjustment. resolution: factor 1, drawn anew at every reading (noise, quantisation, repeatability, INL), so no
   * adjustment removes it. bias and bias-mismatch: input currents that double every `doubling` kelvins. `factorOf` turns
   * each into a number. */
  behaviour:
    'constant' | 'temperature' | 'sensor-temperature' | 'ageing' | 'resolution' | 'bias' | 'bias-mismatch'
  /** Kelvins for a bias current to double; absent or 0: constant. */
  doubling?: number
  /** Standard deviations inside the limit of a normal input, where it is cut; absent 3. */
  deviations?: number
  /** Inputs that move together by construction, e.g. `resistors`; null for one of its own. */
  group: string | null
  /**
   * Where it enters the network: `scale` of the port's amount per unit of x. With `relative` the amount is that
   * fraction of the element's own value (resistors and capacitors, sources).
   */
  effects: { ref: string; port: PortName; scale: number; relative: boolean }[]
  /** dy per unit of x that enters after the network (converter's own errors), given nominal y, V; null for none. */
  onOutput: ((y: number) => number) | null
}

/** Under what an input is looked at: °C of the electronics and of the sensor, years since the adjustment. */
export interface Condition {
  temperature: number
  sensorTemperature: number
  years: number
}

/** Data sheets state their figures at this temperature, °C. */
export const STATED_AT = 25

/** What multiplies an input's x under a condition. */
export function factorOf(input: Pick<ErrorInput, 'behaviour' | 'doubling'>, at: Condition): number {
  switch (input.behaviour) {
    case 'constant':
    case 'resolution':
      return 1
    case 'temperature':
      return at.temperature - STATED_AT
    case 'sensor-temperature':
      return at.sensorTemperature - STATED_AT
    case 'ageing':
      return at.years
    case 'bias':
      // The network holds the current at 25 °C. A board may have none of it, and when hot the whole growth more.
      return Math.max(1, growthOf(input.doubling, at.temperature) - 1)
    case 'bias-mismatch':
      return Math.max(1, growthOf(input.doubling, at.temperature))
  }
}

/** Factor of a bias current over its figure at 25 °C; common practice for FET inputs. */
export const growthOf = (doubling: number | undefined, temperature: number): number =>
  doubling !== undefined && doubling > 0 ? 2 ** ((temperature - STATED_AT) / doubling) : 1

/** Standard deviations at which a normal input is cut unless it says otherwise. */
export const CUT = 3
