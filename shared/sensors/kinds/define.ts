import type { z } from 'zod'
import type { Distribution, Ends, Fault, Reason } from '#shared/design/plan.ts'
import type { NetworkBuilder } from '#shared/network/builder.ts'
import type { SourceVariable } from '#shared/analysis/extremes.ts'
import type { ErrorInput } from '#shared/budget/error-input.ts'

/** What the rest of the design offers a sensor. Voltages in V, temperatures in °C. */
export interface SensorContext {
  /** Voltage and variable of each source that an excitation may share. */
  shared: Record<'converter' | 'shift' | 'positive', { voltage: number; variable: string } | null>
  /** Largest excursion of the sensor's temperature from 25 °C, K. */
  temperatureSpan: number
  /** Calibration interval, over which the sensor ages, years. */
  years: number
  /** Distribution of a limit that does not say its own. */
  distribution: Distribution
}

/** The electrical signal that a sensor gives. */
export interface SensorSignal {
  /** Open-circuit output at quantity.low and quantity.high, V; low may be the larger. */
  ends: Ends
  /** Readings that must stay distinguishable, same order; null where the design states none. */
  beyond: Ends | null
  /** Unit of that output, as `per` in the plan. */
  per: string
  differential: boolean
  /** Range of the common mode, V; null for a single-ended signal. */
  commonMode: Ends | null
  /** Resistance of the source, per leg, Ω, as the first stage sees it. */
  sourceResistance: number
  /** No DC path to ground through the sensor. */
  floating: boolean
}

/** What a sensor adds to the network: where the chain begins and what in it is uncertain. */
export interface SensorSource {
  /** Nodes that the first stage connects to. */
  p: string
  n: string | null
  variables: SourceVariable[]
  /** The sensor's own errors, each by itself; `variables` holds their limits over temperature and time. */
  inputs: ErrorInput[]
  /** Sources of the sensor that follow a shared reference volt for volt. */
  follows: { variable: string; ref: string }[]
  /** The source whose value moves the signal volt for volt; clip points are searched along it. */
  signal: { variable: string; ref: string }
}

export interface SensorKind<Kind extends string = string, Schema extends z.ZodType = z.ZodType> {
  kind: Kind
  /** Name in the picker. */
  title: string
  /** One line about when to use it. */
  summary: string
  schema: Schema
  /** Keys of the schema in the order in which a form asks for them; the rest follows folded. */
  form: readonly string[]
  /** A typical, complete sensor of this kind. */
  example: z.input<Schema>
  /** Cross-field faults, paths relative to the sensor. */
  check(sensor: z.output<Schema>): Fault[]
  signal(sensor: z.output<Schema>, context: SensorContext): SensorSignal
  /** Adds the source to the network with the measurand at `quantity`. */
  source(
    sensor: z.output<Schema>,
    context: SensorContext,
    builder: NetworkBuilder,
    quantity: number,
  ): SensorSource
  /** Sentences about this sensor that belong on the note. */
  cautions(sensor: z.output<Schema>): Reason[]
}

/** Keeps the literal type of a kind's schema, so that the union of all kinds is inferred from the list. */
export function defineSensor<Kind extends string, Schema extends z.ZodType>(
  kind: SensorKind<Kind, Schema>,
): SensorKind<Kind, Schema> {
  return kind
}
