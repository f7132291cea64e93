/**
 * Words for keys and choices whose schema carries no label: groups, choices and switches. What is missing here is
 * spelled out from its key, so that a new key never stands without a name.
 */
const labels: Readonly<Record<string, string>> = {
  absolute: 'Absolute limits',
  accuracy: 'Accuracy of the sensor',
  amplifier: 'Amplifiers',
  beyond: 'Readings beyond the span that must stay distinguishable',
  buffered: 'Reference output is buffered',
  capacitors: 'Capacitors',
  cin: 'Input capacitance',
  cmrr: 'Common-mode rejection',
  coding: 'Coding',
  commonMode: 'Common mode',
  corner: 'Corner frequency',
  dielectric: 'Dielectric',
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
  name: 'Name',
  output: 'Sensor output',
  per: 'Counted in',
  phaseReversal: 'Output reverses when an input leaves its range',
  psrr: 'Supply rejection',
  quantity: 'Measurand',
  rails: 'Rails',
  reference: 'Reference of the converter',
  resistors: 'Resistors',
  same: 'It is the same as',
  series: 'Series',
  shiftReference: 'Shift reference',
  state: 'Holds',
  stock: 'Only these values, from stock',
  temperature: 'Temperature',
  unit: 'Unit',
  wiring: 'Wiring',
}

const choices: Readonly<Record<string, string>> = {
  'single-ended': 'single-ended, against ground',
  differential: 'differential, two wires on a common mode',
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

export const labelOf = (key: string): string => labels[key] ?? spellOut(key)

export const choiceLabel = (option: string): string => choices[option] ?? option
