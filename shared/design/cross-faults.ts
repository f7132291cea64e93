import { kindOf } from '#shared/sensors/index.ts'
import type { Fault } from './plan.ts'
import { temperatureSpan } from './references.ts'
import type { Design } from './schema.ts'

type Add = (path: string, reason: string, accepted: string) => void

/** Below this a span of volts is lost in rounding and in any noise, V. */
const SMALLEST_SPAN = 1e-9
/** A span this much smaller than the figures around it is lost in their rounding. */
const SMALLEST_SHARE = 1e-9
/** Most decades of a window: beyond, the pairs of values no longer fit into memory. */
const MOST_DECADES = 8
/** Values that parts come in: beyond, a network of them has no answer in double precision. Ω and F. */
const PARTS = { Ω: [1e-3, 1e12], F: [1e-15, 1] } as const
/** Largest capacitance of an amplifier's input, F. */
const MOST_INPUT = 1e-6
/** Adjustment points: within this many spans of the span, and this share of it apart at least. */
const FARTHEST = 10
const CLOSEST = 0.01
/** Largest bias current that any input carries, A. */
const MOST_BIAS = 1

/** Faults that no single field shows: each pair of fields is named by the one to change. */
export function crossFaults(design: Design): Fault[] {
  const faults: Fault[] = []
  const add: Add = (path, reason, accepted) => faults.push({ path, reason, accepted })
  sensorFaults(design, add)
  converterFaults(design, add)
  referenceFaults(design, add)
  partFaults(design, add)
  smallFaults(design, add)
  digitalFaults(design, add)
  calibrationFaults(design, add)
  if (design.temperature.low > design.temperature.high)
    add('temperature.high', 'the temperature range is reversed', `${design.temperature.low} or more, in °C`)
  for (const [ref, value] of Object.entries(design.choose.values ?? {}))
    partValue(`choose.values.${ref}`, /^C/i.test(ref) ? 'F' : 'Ω', value, add)
  const refs = design.choose.stages?.map((stage) => stage.ref) ?? []
  if (new Set(refs).size < refs.length)
    add('choose.stages', 'one stage is described twice', 'one entry for each of S1 and S2')
  return faults
}

/** Whether two ends are so close that their difference is lost in rounding. */
const isLost = (low: number, high: number): boolean =>
  Math.abs(high - low) < SMALLEST_SHARE * Math.max(Math.abs(low), Math.abs(high))

function sensorFaults({ sensor }: Design, add: Add): void {
  const { low, high } = sensor.quantity
  if (low === high)
    add('sensor.quantity.high', 'the measurand has no span: low and high are equal', 'two different values')
  else if (isLost(low, high) || Math.abs(high - low) < 1e-30)
    add(
      'sensor.quantity.high',
      'the span of the measurand is too small to tell its ends apart',
      'a span of at least a billionth of the larger end',
    )
  for (const fault of kindOf(sensor).check(sensor)) add(`sensor.${fault.path}`, fault.reason, fault.accepted)
  if (sensor.kind === 'voltage' && sensor.output.low !== sensor.output.high) {
    const { output } = sensor
    if (isLost(output.low, output.high) || Math.abs(output.high - output.low) < SMALLEST_SPAN)
      add(
        'sensor.output.high',
        'the span of the sensor output is too small',
        `a span of ${SMALLEST_SPAN} V or more, and of a billionth of the larger end`,
      )
  }
  if (sensor.temperature && sensor.temperature.low > sensor.temperature.high)
    add(
      'sensor.temperature.high',
      'the temperature range of the sensor is reversed',
      `${sensor.temperature.low} or more, in °C`,
    )
  if (sensor.bandLow !== undefined && sensor.bandwidth !== undefined && sensor.bandLow >= sensor.bandwidth)
    add(
      'sensor.bandLow',
      'the lowest frequency of interest is not below the signal bandwidth',
      `a frequency below ${sensor.bandwidth}, in Hz`,
    )
}

function converterFaults({ converter, rails }: Design, add: Add): void {
  const { input, guard, commonMode, absolute } = converter
  if (input.low >= input.high)
    add(
      'converter.input.high',
      'the converter range is empty or reversed',
      `a voltage above ${input.low}, in V`,
    )
  else if (isLost(input.low, input.high) || input.high - input.low < SMALLEST_SPAN)
    add(
      'converter.input.high',
      'the converter range is too small',
      `a range of ${SMALLEST_SPAN} V or more, and of a billionth of the larger end`,
    )
  if (guard && guard.low + guard.high >= 1)
    add(
      'converter.guard',
      'the guard bands meet: nothing of the range is left',
      'two fractions with a sum below 1',
    )
  if (commonMode && commonMode.low > commonMode.high)
    add(
      'converter.commonMode.high',
      'the common mode range of the converter is reversed',
      `${commonMode.low} or more, in V`,
    )
  if (absolute && absolute.low >= absolute.high)
    add(
      'converter.absolute.high',
      'the absolute limits are reversed',
      `a voltage above ${absolute.low}, in V`,
    )
  if (rails.negative >= rails.positive)
    add('rails.positive', 'the rails are reversed or equal', `a voltage above ${rails.negative}, in V`)
  else if (rails.positive - rails.negative < SMALLEST_SPAN)
    add('rails.positive', 'the rails are too close', `a voltage above ${rails.negative}, in V`)
}

function referenceFaults(design: Design, add: Add): void {
  const { converter, rails, shiftReference, sensor } = design
  const { reference } = converter
  if (reference?.same === 'positive' && reference.voltage !== rails.positive)
    add(
      'converter.reference.voltage',
      `the reference is the positive rail, yet ${reference.voltage} V is not ${rails.positive} V`,
      `${rails.positive}, in V, or leave same out`,
    )
  if (reference?.same === 'converter' || reference?.same === 'shift')
    add(
      'converter.reference.same',
      'the converter reference can only be the positive rail',
      '"positive", or leave it out',
    )
  const shift = shiftVoltage(design)
  if (shiftReference) {
    const { same, voltage } = shiftReference
    if (same === 'converter' && !reference)
      add('shiftReference.same', 'the converter names no reference to share', 'give converter.reference')
    if (same === 'shift')
      add('shiftReference.same', 'a reference cannot be itself', '"converter" or "positive"')
    if (same && shift !== undefined && voltage !== undefined && voltage !== shift)
      add(
        'shiftReference.voltage',
        `it is the same source, yet ${voltage} V is not ${shift} V`,
        `${shift}, in V, or leave it out`,
      )
    if (!same && voltage === undefined)
      add('shiftReference.voltage', 'the reference has no voltage', 'a number above 0, in V')
  }
  const span = temperatureSpan(design)
  for (const [path, given] of [
    ['converter.reference', reference],
    ['shiftReference', shiftReference],
  ] as const)
    if (given && given.tolerance + given.drift * span >= 1)
      add(
        `${path}.drift`,
        'tolerance and drift over temperature come to 100 % or more',
        'figures that leave the reference above 0 V at every temperature',
      )
  if (sensor.kind !== 'bridge' || typeof sensor.excitation !== 'object' || !sensor.excitation.same) return
  const { same, voltage } = sensor.excitation
  const shared = same === 'positive' ? rails.positive : same === 'converter' ? reference?.voltage : shift
  if (same === 'positive' && rails.positive <= 0)
    add(
      'sensor.excitation.same',
      'the positive rail is not above 0 V and cannot excite the bridge',
      'a voltage of its own above 0, in V, or a positive rail above 0 V',
    )
  if (shared === undefined)
    add(
      'sensor.excitation.same',
      'there is no such reference to share',
      'give that reference, or a voltage of its own',
    )
  else if (voltage !== undefined && voltage !== shared)
    add(
      'sensor.excitation.voltage',
      `it is the same source, yet ${voltage} V is not ${shared} V`,
      `${shared}, in V, or leave it out`,
    )
}

/** Figures so small that no part has them: a network of them has no answer in double precision. */
function smallFaults({ converter, parts, rules }: Design, add: Add): void {
  const least = (path: string, value: number, smallest: number, unit: string, orZero = true): void => {
    if (value >= smallest || (orZero && value === 0)) return
    add(path, 'no part has so small a figure', `${orZero ? '0, or ' : ''}${smallest} ${unit} or more`)
  }
  least('converter.inputResistance', converter.inputResistance, 1, 'Ω', false)
  least('converter.switchResistance', converter.switchResistance, 1e-3, 'Ω')
  if (converter.multiplexed)
    least('converter.multiplexed.resistance', converter.multiplexed.resistance, 1e-3, 'Ω')
  least('parts.amplifier.gbw', parts.amplifier.gbw, 1, 'Hz', false)
  const { common, differential } = parts.amplifier.cin
  for (const [path, value] of [
    ['common', common],
    ['differential', differential],
  ] as const)
    if (value > MOST_INPUT)
      add(`parts.amplifier.cin.${path}`, 'no input has so large a capacitance', `up to ${MOST_INPUT}, in F`)
  if (rules.settling >= 2 ** (converter.bits - 1))
    add(
      'rules.settling',
      'half the range or more of the converter counts as settled',
      `below ${2 ** (converter.bits - 1)}, in LSB`,
    )
}

/** What a digital filter needs, and what belongs to it. */
function digitalFaults({ converter }: Design, add: Add): void {
  const { architecture, digitalFilter, modulatorRate, outputRate } = converter
  if (outputRate !== undefined && modulatorRate !== undefined && outputRate > modulatorRate)
    add(
      'converter.outputRate',
      'results cannot come faster than the modulator runs',
      `up to ${modulatorRate}, in Hz`,
    )
  if (architecture !== 'oversampling' || digitalFilter === 'none') return
  if (modulatorRate === undefined)
    add(
      'converter.modulatorRate',
      'the digital filter has no modulator rate to work from',
      'a number above 0, in Hz',
    )
  if (outputRate === undefined)
    add('converter.outputRate', 'the digital filter has no output data rate', 'a number above 0, in Hz')
}

/** Two adjustment points have to be told apart, and lie where the chain can be brought. */
function calibrationFaults({ calibration, sensor }: Design, add: Add): void {
  const { low, high } = sensor.quantity
  const span = Math.abs(high - low)
  const [first, second] = calibration.points
  calibration.points.forEach((point, i) => {
    if (Math.abs(point - low) > FARTHEST * span && Math.abs(point - high) > FARTHEST * span)
      add(
        `calibration.points.${i}`,
        'the adjustment point lies far outside the span',
        `a value within ${FARTHEST} spans of ${low} to ${high}`,
      )
  })
  if (first === undefined || second === undefined || first === second) return
  if (Math.abs(second - first) < CLOSEST * span)
    add(
      'calibration.points.1',
      'the two adjustment points are too close to set a span by',
      `a value at least ${CLOSEST * span} away from ${first}, or the same`,
    )
}

/** Voltage of the shift reference by what it is the same as; undefined where nothing says it. */
function shiftVoltage({ converter, rails, shiftReference }: Design): number | undefined {
  if (!shiftReference || shiftReference.same === 'converter') return converter.reference?.voltage
  return shiftReference.same === 'positive' ? rails.positive : shiftReference.voltage
}

function partFaults({ parts, temperature }: Design, add: Add): void {
  const { resistors, capacitors, amplifier, instrumentation } = parts
  windowFaults('parts.resistors', 'Ω', resistors, add)
  windowFaults('parts.capacitors', 'F', capacitors, add)
  if (instrumentation.gainMinimum > instrumentation.gainMaximum)
    add(
      'parts.instrumentation.gainMaximum',
      'the gain range is reversed',
      `${instrumentation.gainMinimum} or more`,
    )
  for (const [name, part] of [
    ['amplifier', amplifier],
    ['instrumentation', instrumentation],
  ] as const)
    if (part.minimumSupply > part.maximumSupply)
      add(
        `parts.${name}.maximumSupply`,
        'the supply range is reversed',
        `${part.minimumSupply} or more, in V`,
      )
  const { ib, ios, ibDoubling } = amplifier
  const grown = ibDoubling > 0 ? 2 ** ((temperature.high - 25) / ibDoubling) : 1
  if (Math.max(Math.abs(ib), ios) * grown > MOST_BIAS)
    add(
      'parts.amplifier.ibDoubling',
      `the bias current would pass ${MOST_BIAS} A at ${temperature.high} °C`,
      'more kelvins for each doubling, 0 for a constant current, or a smaller bias current',
    )
}

/** A value that no part has. */
function partValue(path: string, unit: 'Ω' | 'F', value: number, add: Add): void {
  const [least, most] = PARTS[unit]
  if (value < least || value > most)
    add(path, `no part has ${value} ${unit}`, `a number from ${least} up to ${most}, in ${unit}`)
}

function windowFaults(
  path: string,
  unit: 'Ω' | 'F',
  { minimum, maximum, stock }: { minimum: number; maximum: number; stock: number[] },
  add: Add,
): void {
  stock.forEach((value, at) => partValue(`${path}.stock[${at}]`, unit, value, add))
  partValue(`${path}.minimum`, unit, minimum, add)
  partValue(`${path}.maximum`, unit, maximum, add)
  if (minimum > maximum)
    return add(`${path}.maximum`, 'the window of values is reversed', `${minimum} or more, in ${unit}`)
  if (Math.log10(maximum / minimum) > MOST_DECADES)
    add(
      `${path}.minimum`,
      `the window of values spans more than ${MOST_DECADES} decades`,
      `${maximum / 10 ** MOST_DECADES} or more, in ${unit}`,
    )
}
