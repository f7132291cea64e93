import { prefixExponent } from './prefixes.ts'

interface Atom {
  spellings: string[]
  /** Lower and upper exponent of the prefixes with which a figure is printed; absent: printed without. */
  printed?: [low: number, high: number]
  /** True where a prefix may be typed before the unit. */
  prefixed: boolean
  /** What the unit measures, for refusals. */
  measures: string
}

const atom = (measures: string, spellings: string[], printed?: [number, number]): Atom => ({
  spellings,
  measures,
  prefixed: true,
  ...(printed ? { printed } : {}),
})
const plain = (measures: string, spellings: string[]): Atom => ({ spellings, measures, prefixed: false })

/** Units that are known by name. A measurand may carry any other text as its unit; it is then taken as it stands. */
const atoms: Record<string, Atom> = {
  Ω: atom('a resistance', ['Ω', 'ohm', 'Ohm', 'ohms', 'Ohms'], [-3, 12]),
  F: atom('a capacitance', ['F', 'farad'], [-15, 0]),
  V: atom('a voltage', ['V', 'volt', 'volts'], [-9, 3]),
  A: atom('a current', ['A', 'amp', 'amps'], [-15, 3]),
  Hz: atom('a frequency', ['Hz', 'hz', 'HZ'], [-3, 12]),
  s: atom('a time', ['s', 'sec'], [-12, 0]),
  W: atom('a power', ['W', 'watt', 'watts'], [-9, 6]),
  S: atom('a conductance', ['S'], [-9, 0]),
  H: atom('an inductance', ['H'], [-9, 0]),
  m: atom('a length', ['m'], [-9, 0]),
  Pa: atom('a pressure', ['Pa']),
  bar: atom('a pressure', ['bar']),
  g: atom('a mass', ['g']),
  N: atom('a force', ['N']),
  J: atom('an energy', ['J']),
  '√Hz': plain('a root of a frequency', ['√Hz', 'rtHz', 'sqrtHz', 'sqrt(Hz)']),
  K: plain('a temperature difference', ['K', '°C', 'degC', 'kelvin']),
  '°C': plain('a temperature', ['°C', 'C', 'degC']),
  '°': plain('an angle', ['°', 'deg']),
  '%': plain('a percentage', ['%']),
  ppm: plain('a ratio', ['ppm']),
  dB: plain('a ratio in decibels', ['dB', 'db']),
  LSB: plain('a number of codes', ['LSB', 'lsb', 'LSBs']),
  year: plain('a time in years', ['year', 'years', 'yr']),
  years: plain('a time in years', ['year', 'years', 'yr']),
}

/** True where a prefix letter alone, as in `22m`, may stand for prefix and unit. */
export function takesBarePrefix(unit: string): boolean {
  const first = atoms[unit.split('/')[0] ?? '']
  return unit.startsWith('1/') ? false : first === undefined || first.prefixed
}

/** Exponents of the prefixes with which a figure in this unit is printed; null: none. */
export function printedPrefixes(unit: string): [low: number, high: number] | null {
  if (unit.startsWith('1/') || unit === 'V/V') return null
  return atoms[unit.split('/')[0] ?? '']?.printed ?? null
}

/** "a voltage", or "a value in NTU" where the unit is not known by name. */
export function measuredBy(unit: string): string {
  if (unit === '' || unit === 'V/V') return 'a plain number'
  return atoms[unit]?.measures ?? `a value in ${unit}`
}

/** Power of ten by which a number with this suffix is multiplied to be in `unit`; null where it does not fit. */
export function suffixExponent(suffix: string, unit: string, percent: boolean): number | null {
  if (percent) return suffix === '' || suffix === '%' ? -2 : suffix === 'ppm' ? -6 : null
  if (suffix === '' || suffix === unit) return 0
  const ratio = ratioExponent(suffix, unit)
  if (ratio !== null) return ratio
  const exact = atomExponent(suffix, unit)
  if (exact !== null) return exact
  const bare = takesBarePrefix(unit) ? prefixExponent(suffix) : null
  return bare ?? quotientExponent(suffix, unit)
}

/** Name of the unit that a suffix spells, whatever the field takes; null where it spells none. */
export function unitSpelledBy(suffix: string): { unit: string; exponent: number } | null {
  for (const unit of Object.keys(atoms)) {
    const exponent = atomExponent(suffix, unit)
    if (exponent !== null) return { unit, exponent }
  }
  return null
}

function ratioExponent(suffix: string, unit: string): number | null {
  const isRatio = unit === '' || unit === 'V/V'
  if (isRatio) return suffix === '%' ? -2 : suffix === 'ppm' ? -6 : null
  if (!unit.startsWith('1/')) return null
  const [top = '', bottom] = suffix.split('/')
  const per = unit.slice(2)
  if (bottom !== undefined && atomExponent(bottom, per) === null) return null
  return top === '%' ? -2 : top === 'ppm' ? -6 : top === '' || top === '1' ? 0 : null
}

/** `mV` in V gives −3, `V` gives 0, anything else null. */
function atomExponent(suffix: string, unit: string): number | null {
  const known = atoms[unit]
  if (!known) return suffix === unit ? 0 : null
  if (known.spellings.includes(suffix)) return 0
  if (unit === 'm' && suffix === 'cm') return -2
  if (!known.prefixed) return null
  return known.spellings.includes(suffix.slice(1)) ? prefixExponent(suffix.slice(0, 1)) : null
}

/** `nV/√Hz` in V/√Hz gives −9, `V/μs` in V/s gives 6. */
function quotientExponent(suffix: string, unit: string): number | null {
  const [top, bottom] = unit.split('/')
  const [typedTop, typedBottom] = suffix.split('/')
  if (!top || !bottom || typedTop === undefined) return null
  const above = atomExponent(typedTop, top)
  const below = typedBottom === undefined ? null : atomExponent(typedBottom, bottom)
  return above === null || below === null ? null : above - below
}
