/**
 * Words for keys and choices whose schema carries no label: groups, choices and switches. What is missing here is
 * spelled out from its key, so that a new key never stands without a name.
 */
const labels: Readonly<Record<string, string>> = {
  absolute: 'Absolute limits',
  accuracy: 'Accuracy of the sensor',
  amplifier: 'Amplifiers',
  architecture: 'Kind of converter',
  beyond: 'Readings beyond the span that must stay distinguishable',
  buffered: 'Reference output is buffered',
  capacitors: 'Capacitors',
  cin: 'Input capacitance',
  cmrr: 'Common-mode rejection',
  coding: 'Coding',
  commonMode: 'Common mode',
  corner: 'Corner frequency',
  dielectric: 'Dielectric',
  digitalFilter: 'Digital filter',
  distribution: 'Distribution of a limit',
  drive: 'Converter drive',
  excitation: 'Excitation',
  fault: 'Voltage that miswiring can bring',
  filter: 'Filter',
  floating: 'Source is floating: no path to ground through the sensor',
  guard: 'Guard bands',
  input: 'Converter input',
  instrumentation: 'Integrated instrumentation amplifier',
  kind: 'Kind',
  multiplexed: 'Multiplexed inputs',
  name: 'Name',
  output: 'Sensor output',
  per: 'Counted in',
  points: 'Adjusted at',
  phaseReversal: 'Output reverses when an input leaves its range',
  psrr: 'Supply rejection',
  quantity: 'Measurand',
  rails: 'Rails',
  reference: 'Reference of the converter',
  resistors: 'Resistors',
  response: 'Response',
  same: 'Same source as',
  series: 'Series',
  shiftReference: 'Shift reference',
  state: 'Holds',
  stock: 'Only these values, from stock',
  temperature: 'Temperature',
  unit: 'Unit',
  wiring: 'Wiring',
}

const choices: Readonly<Record<string, string>> = {
  straight: 'straight binary',
  offset: 'offset binary',
  twos: 'two’s complement',
  converter: 'the converter’s reference',
  shift: 'the shift reference',
  positive: 'the positive rail',
  span: 'share of the span',
  quantity: 'unit of the measurand',
  asBuilt: 'as built',
  zeroed: 'after zero adjustment',
  calibrated: 'after zero and span adjustment',
  rectangular: 'rectangular: anywhere within the limit',
  normal: 'normal: limit at three standard deviations',
  film: 'film',
  rc: 'resistor and capacitor before the converter',
  'sallen-key': 'Sallen–Key sections',
  'multiple-feedback': 'multiple-feedback sections',
  butterworth: 'Butterworth: flattest in the band',
  bessel: 'Bessel: least overshoot',
  chebyshev: 'Chebyshev: steepest, with ripple in the band',
  sar: 'successive approximation',
  oversampling: 'oversampling, with a digital filter',
  sinc1: 'sinc, first order',
  sinc2: 'sinc, second order',
  sinc3: 'sinc, third order',
  sinc4: 'sinc, fourth order',
  none: 'none',
}

/** `sourceResistance` becomes "Source resistance". */
function spellOut(key: string): string {
  const words = key.replace(
    /([a-z0-9])([A-Z])/g,
    (_, before: string, capital: string) => `${before} ${capital.toLowerCase()}`,
  )
  return words.charAt(0).toUpperCase() + words.slice(1)
}

/** Where the key alone would not say which one it is. */
const byPath: Readonly<Record<string, string>> = {
  name: 'Name of the channel',
  'sensor.quantity.name': 'Measurand',
  'sensor.quantity.unit': 'Unit of the measurand',
  'sensor.wiring': 'Wiring of the sensor',
  'sensor.excitation.same': 'Excitation comes from',
  'converter.wiring': 'Wiring of the converter',
  'converter.reference.same': 'Reference of the converter is',
  'shiftReference.same': 'Shift reference is',
  'shiftReference.voltage': 'Shift reference voltage',
  'shiftReference.tolerance': 'Shift reference tolerance',
  'shiftReference.drift': 'Shift reference drift',
  'choose.filter.kind': 'Kind of filter',
  'choose.filter.response': 'Response of the filter',
  'parts.amplifier.name': 'Name of the amplifier',
  'parts.instrumentation.name': 'Name of the part',
  'parts.resistors.series': 'Series of the resistors',
  'parts.capacitors.series': 'Series of the capacitors',
}

/** Words for the key at a path of the design. */
export const labelOf = (path: string): string => {
  const key = path.slice(path.lastIndexOf('.') + 1)
  return byPath[path] ?? labels[key] ?? spellOut(key)
}

export const choiceLabel = (option: string): string => choices[option] ?? option

/** True where the words of the path are more exact than those of the schema. */
export const hasOwnLabel = (path: string): boolean => Object.hasOwn(byPath, path)
