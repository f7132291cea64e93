import type { SourceVariable } from '#shared/analysis/extremes.ts'
import type { Arrangement, Need, Sizing } from '#shared/amplifiers/define.ts'
import { StageBuilder, type AmplifierErrors, type Pin } from '#shared/amplifiers/stage-builder.ts'
import { addFilter, type FollowingNode } from '#shared/filters/build-filter.ts'
import type { FilterSpec } from '#shared/filters/filter-spec.ts'
import { growthOf, type ErrorInput } from '#shared/budget/error-input.ts'
import { NetworkBuilder } from '#shared/network/builder.ts'
import type { Network } from '#shared/network/types.ts'
import { kindOf } from '#shared/sensors/index.ts'
import type { SensorContext, SensorSource } from '#shared/sensors/kinds/define.ts'
import type { Ends } from './plan.ts'
import { resolveReferences, temperatureSpan, type References } from './references.ts'
import type { Design } from './schema.ts'

/** One stage as decided: its arrangement, how it was sized and the values it was given, Ω by its own refs. */
export interface StageChoice {
  ref: 'S1' | 'S2'
  arrangement: Arrangement
  sizing: Sizing
  need: Need
  values: Record<string, number>
}

export interface ChainSpec {
  stages: StageChoice[]
  filter: FilterSpec
  /** Feedback capacitors that the plan adds so that amplifiers stand firm: ref → F. What a person chose goes first. */
  compensation?: Record<string, number>
}

/** A whole chain as one network at one value of the measurand, with what is uncertain in it. */
export interface Chain {
  network: Network
  pins: Pin[]
  errors: AmplifierErrors[]
  variables: SourceVariable[]
  /** Errors of the sensor itself, each by itself; `variables` holds their limits. */
  sensorInputs: ErrorInput[]
  /** Resistors with a tolerance box: ref → ± fraction over temperature and the calibration interval. */
  resistors: { ref: string; relative: number }[]
  signal: SensorSource['signal']
  /** Nodes along the chain in order: the sensor's, after each stage, the converter's. */
  levels: { node: string; title: string; p: string; n: string | null }[]
  /** Nodes from the filter's input on, which move with the converter's pin or against it. */
  following: FollowingNode[]
  references: References
}

export function sensorContext(design: Design): SensorContext {
  const references = resolveReferences(design)
  const range = design.sensor.temperature ?? design.temperature
  const give = (r: { voltage: number; variable: string } | null) =>
    r && { voltage: r.voltage, variable: r.variable }
  return {
    shared: {
      converter: give(references.converter),
      shift: give(references.shift),
      positive: { voltage: design.rails.positive, variable: 'positiveRail' },
    },
    temperatureSpan: Math.max(Math.abs(range.low - 25), Math.abs(range.high - 25)),
    years: design.calibration.interval,
    distribution: design.analysis.distribution,
  }
}

/** Open-circuit output of the sensor at both ends of the span, V. */
export function sensorEnds(design: Design): Ends {
  return kindOf(design.sensor).signal(design.sensor, sensorContext(design)).ends
}

/** Builds the chain of a design with the measurand at `quantity`. Throws RangeError for a broken promise. */
export function buildChain(given: Design, spec: ChainSpec, quantity: number, title = given.name): Chain {
  const design = spec.compensation ? withValues(given, spec.compensation) : given
  const builder = new NetworkBuilder()
  const references = resolveReferences(design)
  const variables: SourceVariable[] = []
  addSupplies(builder, design, references, spec, variables)
  const kind = kindOf(design.sensor)
  const source = kind.source(design.sensor, sensorContext(design), builder, quantity)
  variables.push(...source.variables)
  for (const follow of source.follows) shareVariable(variables, follow.variable, follow.ref)

  const counter = { amplifiers: 0 }
  const pins: Pin[] = []
  const errors: AmplifierErrors[] = []
  const levels: Chain['levels'] = [
    {
      node: 'sensor',
      title: 'Sensor output',
      p: source.n ? 'sense_p' : 'sense',
      n: source.n ? 'sense_n' : null,
    },
  ]
  let at: { p: string; n: string | null } = { p: source.p, n: source.n }
  spec.stages.forEach((choice, index) => {
    const last = index === spec.stages.length - 1
    // A stage of wires has no output of its own: the node before it goes on.
    const out =
      choice.arrangement.amplifiers === 0 ? at.p : last && spec.filter.kind === 'none' ? 'adc' : choice.ref
    const stage = new StageBuilder(builder, counter, design, choice.ref, index === 0 ? '' : 'B', {
      ...at,
      out,
    })
    choice.arrangement.build(stage, choice.values, choice.sizing, choice.need)
    pins.push(...stage.pins)
    errors.push(...stage.errors)
    if (choice.arrangement.amplifiers > 0)
      levels.push({ node: choice.ref, title: `After ${choice.ref}`, p: out, n: null })
    at = { p: out, n: null }
  })
  const filter = addFilter(builder, counter, design, spec.filter, at.p)
  pins.push(...filter.pins)
  errors.push(...filter.errors)
  levels.push(...filter.levels)
  addConverter(builder, design, variables)
  levels.push({ node: 'adc', title: 'Converter input', p: 'adc', n: null })
  variables.push(...errorVariables(design, errors))

  const network = builder.build({
    title,
    output: { p: 'adc', n: '0' },
    temperature: design.temperature.calibration,
  })
  const span = temperatureSpan(design)
  const aged = design.parts.resistors.ageing * design.calibration.interval
  const resistors = network.elements.flatMap((e) => {
    if (e.kind !== 'resistor') return []
    const relative = e.tolerance + e.drift * span + (e.fixed ? 0 : aged)
    return relative > 0 ? [{ ref: e.ref, relative: Math.min(relative, 0.99) }] : []
  })
  const sensorInputs = source.inputs
  return {
    network,
    pins,
    errors,
    variables,
    sensorInputs,
    resistors,
    signal: source.signal,
    levels,
    following: filter.following,
    references,
  }
}

function withValues(design: Design, values: Record<string, number>): Design {
  return { ...design, choose: { ...design.choose, values: { ...values, ...design.choose.values } } }
}

/** Lets one more source move with a variable that exists already. */
function shareVariable(variables: SourceVariable[], id: string, ref: string): void {
  variables.find((v) => v.id === id)?.injections.push({ ref, port: 'value', scale: 1 })
}

function addSupplies(
  builder: NetworkBuilder,
  design: Design,
  references: References,
  spec: ChainSpec,
  variables: SourceVariable[],
): void {
  const { rails } = design
  const rail = (id: string, ref: string, node: string, value: number) => {
    builder.voltageSource({ ref, p: node, n: '0', value, stage: 'supply' })
    const reach = Math.abs(value) * rails.tolerance + rails.ripple
    variables.push({
      id,
      nominal: value,
      low: value - reach,
      high: value + reach,
      injections: [{ ref, port: 'value', scale: 1 }],
    })
  }
  rail('positiveRail', 'VPOS', 'vpos', rails.positive)
  rail('negativeRail', 'VNEG', 'vneg', rails.negative)
  const { converter, shift } = references
  const addVariable = (r: NonNullable<References['shift']>) => {
    if (variables.some((v) => v.id === r.variable)) return
    const reach = r.voltage * r.spread
    variables.push({
      id: r.variable,
      nominal: r.voltage,
      low: r.voltage - reach,
      high: r.voltage + reach,
      injections: [],
    })
  }
  if (converter) addVariable(converter)
  if (shift) {
    addVariable(shift)
    if (needsReference(spec)) {
      const inner = shift.resistance > 0 ? 'vref_inner' : 'vref'
      builder.voltageSource({ ref: 'VREF', p: inner, n: '0', value: shift.voltage, stage: 'supply' })
      if (shift.resistance > 0)
        builder.resistor({
          ref: 'RREF',
          a: inner,
          b: 'vref',
          value: shift.resistance,
          stage: 'supply',
          fixed: true,
          noiseless: true,
        })
      shareVariable(variables, shift.variable, 'VREF')
    }
  }
}

/** Whether any stage or the filter takes something from the reference. */
function needsReference(spec: ChainSpec): boolean {
  const level = spec.filter.level?.kind
  if (level === 'divider' || level === 'reference') return true
  return spec.stages.some((s) => {
    const form = s.sizing.form
    return (
      s.sizing.level?.kind === 'divider' ||
      s.sizing.level?.kind === 'reference' ||
      (form !== null && 'reference' in form)
    )
  })
}

function addConverter(builder: NetworkBuilder, design: Design, variables: SourceVariable[]): void {
  const { inputResistance, inputCurrent } = design.converter
  const stage = 'converter'
  builder.resistor({
    ref: 'RADC',
    a: 'adc',
    b: '0',
    value: inputResistance,
    stage,
    fixed: true,
    noiseless: true,
  })
  if (inputCurrent > 0) {
    builder.currentSource({ ref: 'IADC', from: 'adc', to: '0', value: 0, stage })
    variables.push({
      id: 'converter.inputCurrent',
      nominal: 0,
      low: -inputCurrent,
      high: inputCurrent,
      injections: [{ ref: 'IADC', port: 'value', scale: 1 }],
    })
  }
}

/** Offset, bias, offset current and supply rejection of each amplifier as source variables. */
function errorVariables(design: Design, errors: AmplifierErrors[]): SourceVariable[] {
  const { rails, temperature } = design
  const span = temperatureSpan(design)
  const supplyReach =
    (Math.abs(rails.positive) + Math.abs(rails.negative)) * rails.tolerance + 2 * rails.ripple
  return errors.flatMap((e) => {
    const plus = { ref: e.ref, port: 'ib+' as const }
    const mate = e.integrated?.mate
    const minus = mate ? { ref: mate, port: 'ib+' as const } : { ref: e.ref, port: 'ib-' as const }
    const growth = Math.max(1, growthOf(e.doubling, temperature.high))
    const hottest = e.bias * growth
    const list: SourceVariable[] = [
      symmetric(`${e.ref}.vos`, e.vos + e.vosDrift * span, [{ ref: e.ref, port: 'vos', scale: 1 }]),
      {
        id: `${e.ref}.ib`,
        nominal: e.bias,
        low: Math.min(0, hottest),
        high: Math.max(0, hottest),
        injections: [
          { ...plus, scale: 1 },
          { ...minus, scale: 1 },
        ],
      },
      symmetric(`${e.ref}.ios`, e.ios * growth, [
        { ...plus, scale: 0.5 },
        { ...minus, scale: -0.5 },
      ]),
      symmetric(`${e.ref}.psrr`, e.psrr * supplyReach, [{ ref: e.ref, port: 'vos', scale: 1 }]),
    ]
    return list.filter((v) => v.low !== v.high)
  })
}

function symmetric(id: string, limit: number, injections: SourceVariable['injections']): SourceVariable {
  return { id, nominal: 0, low: -limit, high: limit, injections }
}
