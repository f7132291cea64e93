import { describe, expect, it } from 'vitest'
import { planDesign } from '#shared/design/plan-design.ts'
import type { Fault } from '#shared/design/plan.ts'
import { DesignRefused, readDesign } from '#shared/design/read.ts'
import { buildDesign, buildDifferentialSensor, buildSensor } from '#tests/support/designs.ts'

/*
 * What is not a design is refused, one fault for each thing wrong, by path, reason and what is accepted; by the reader and
 * again by the engine. Documents here are made by hand, so that they may hold what the types forbid.
 */

type Json = Record<string, unknown>

const bridge = {
  kind: 'bridge',
  quantity: { name: 'Water level', unit: 'm', low: 0, high: 5 },
  excitation: 5,
  sensitivity: 0.002,
}

/** A valid document with one place changed. */
function withValue(path: string, value: unknown, from: unknown = buildDesign()): Json {
  const copy = structuredClone(from) as Json
  const keys = path.split('.')
  let at = copy
  for (const key of keys.slice(0, -1)) {
    if (typeof at[key] !== 'object' || at[key] === null) at[key] = {}
    at = at[key] as Json
  }
  at[keys.at(-1) ?? ''] = value
  return copy
}

function without(path: string, from: unknown = buildDesign()): Json {
  const copy = structuredClone(from) as Json
  const keys = path.split('.')
  const holder = keys.slice(0, -1).reduce((at, key) => at[key] as Json, copy)
  delete holder[keys.at(-1) ?? '']
  return copy
}

/** [what is wrong, document, path, words of the reason, words of what is accepted] */
type Row = [string, unknown, string, RegExp, RegExp]

const notANumber: Row[] = [
  ['a NaN', withValue('rails.positive', NaN), 'rails.positive', /positive rail is not a number/, /number.*V/],
  [
    'an infinity',
    withValue('rails.positive', Infinity),
    'rails.positive',
    /positive rail is infinite/,
    /in V/,
  ],
  ['minus infinity', withValue('sensor.output.low', -Infinity), 'sensor.output.low', /infinite/, /in V/],
  [
    'a number too large for JSON',
    JSON.parse(JSON.stringify(buildDesign()).replace('"positive":5', '"positive":1e400')),
    'rails.positive',
    /infinite/,
    /in V/,
  ],
  ['a number as text', withValue('rails.positive', '5'), 'rails.positive', /wrong type: "5"/, /a number/],
  [
    'null for a number',
    withValue('converter.bits', null),
    'converter.bits',
    /wrong type: null/,
    /whole number/,
  ],
  ['a list for a number', withValue('converter.bits', [14]), 'converter.bits', /wrong type/, /whole number/],
  ['true for a number', withValue('rails.tolerance', true), 'rails.tolerance', /wrong type: true/, /below 1/],
]

const outOfRange: Row[] = [
  [
    'a tolerance of 100 %',
    withValue('rails.tolerance', 1),
    'rails.tolerance',
    /rail tolerance is 1/,
    /below 1/,
  ],
  [
    'a resistor tolerance above 100 %',
    withValue('parts.resistors.tolerance', 1.5),
    'parts.resistors.tolerance',
    /resistor tolerance is 1.5/,
    /below 1/,
  ],
  [
    'a negative resistance',
    withValue('sensor.sourceResistance', -1),
    'sensor.sourceResistance',
    /source resistance is -1/,
    /from 0, in Ω/,
  ],
  [
    'a resistance of zero where there has to be one',
    withValue('converter.inputResistance', 0),
    'converter.inputResistance',
    /input resistance is 0/,
    /above 0, in Ω/,
  ],
  [
    'a negative fixed value',
    withValue('choose.values', { R1: -4700 }),
    'choose.values.R1',
    /fixed value is -4700/,
    /above 0/,
  ],
  [
    'an absurd voltage',
    withValue('rails.positive', 1e6),
    'rails.positive',
    /positive rail is 1000000/,
    /up to 10000, in V/,
  ],
  [
    'an absurd resistance',
    withValue('sensor.sourceResistance', 1e16),
    'sensor.sourceResistance',
    /source resistance is/,
    /at most 1000000000000000/,
  ],
  [
    'an absurd capacitance',
    withValue('parts.amplifier.cin.common', 5),
    'parts.amplifier.cin.common',
    /input capacitance is 5/,
    /up to 1, in F/,
  ],
  ['half a bit', withValue('converter.bits', 12.5), 'converter.bits', /converter bits/, /whole number/],
  [
    'too many bits',
    withValue('converter.bits', 40),
    'converter.bits',
    /converter bits is 40/,
    /from 4 up to 32/,
  ],
  ['an empty name', withValue('name', '  '), 'name', /./, /1 to 120 characters/],
  ['an endless name', withValue('name', 'a'.repeat(1000)), 'name', /./, /1 to 120 characters/],
  [
    'a huge list',
    withValue(
      'parts.resistors.stock',
      Array.from({ length: 2001 }, (_, i) => i + 1),
    ),
    'parts.resistors.stock',
    /./,
    /at most 2000/,
  ],
  [
    'a fixed value under a name that no part has',
    withValue('choose.values', { 'R1; drop': 1000 }),
    'choose.values.R1; drop',
    /designator/,
    /letter first/,
  ],
]

const parts: Row[] = [
  [
    'a fixed resistor of next to nothing',
    withValue('choose.values', { R1: 1e-9 }),
    'choose.values.R1',
    /no part has 1e-9 Ω/,
    /from 0.001 up to/,
  ],
  [
    'a fixed capacitor of a hundred farads',
    withValue('choose.values', { C9: 100 }),
    'choose.values.C9',
    /no part has 100 F/,
    /up to 1, in F/,
  ],
  [
    'an absurd resistor in stock',
    withValue('parts.resistors.stock', [1000, 1e14]),
    'parts.resistors.stock[1]',
    /no part has/,
    /in Ω/,
  ],
]

const spans: Row[] = [
  [
    'a measurand without span',
    withValue('sensor.quantity.high', -2.5),
    'sensor.quantity.high',
    /measurand has no span/,
    /two different values/,
  ],
  [
    'an output without span',
    withValue('sensor.output.high', -0.35),
    'sensor.output.high',
    /output has no span/,
    /two different voltages/,
  ],
  [
    'an output span lost in rounding',
    withValue('sensor.output', { low: 1, high: 1 + 2 ** -52 }),
    'sensor.output.high',
    /too small/,
    /billionth/,
  ],
  [
    'a measurand span lost in rounding',
    withValue('sensor.quantity.high', -2.5 + 2 ** -50),
    'sensor.quantity.high',
    /too small/,
    /billionth/,
  ],
  [
    'a converter range of next to nothing',
    withValue('converter.input', { low: 0, high: 1e-300 }),
    'converter.input.high',
    /range is too small/,
    /1e-9 V/,
  ],
  [
    'a bridge whose rated output lies at its zero',
    buildDesign({ sensor: { ...bridge, kind: 'bridge', ratedAt: 0 } }),
    'sensor.ratedAt',
    /no span/,
    /other than 0/,
  ],
  [
    'a bridge whose arms would vanish',
    withValue('sensor.quantity.low', -10000, buildDesign({ sensor: { ...bridge, kind: 'bridge' } })),
    'sensor.quantity.low',
    /no resistance left/,
    /below 0.9/,
  ],
]

const reversed: Row[] = [
  ['reversed rails', withValue('rails.negative', 6), 'rails.positive', /rails are reversed/, /above 6, in V/],
  ['equal rails', withValue('rails.negative', 5), 'rails.positive', /reversed or equal/, /above 5/],
  [
    'a reversed converter range',
    withValue('converter.input', { low: 2.5, high: 0 }),
    'converter.input.high',
    /empty or reversed/,
    /above 2.5/,
  ],
  [
    'guard bands that meet',
    withValue('converter.guard', { low: 0.6, high: 0.4 }),
    'converter.guard',
    /guard bands meet/,
    /sum below 1/,
  ],
  [
    'a reversed temperature range',
    withValue('temperature', { low: 60, high: -10 }),
    'temperature.high',
    /reversed/,
    /60 or more, in °C/,
  ],
  [
    'a reversed temperature range of the sensor',
    withValue('sensor.temperature', { low: 60, high: -10 }),
    'sensor.temperature.high',
    /reversed/,
    /60 or more/,
  ],
  [
    'a reversed common mode',
    buildDesign({ sensor: buildDifferentialSensor(0, 0.1, { low: 3, high: 2 }) }),
    'sensor.commonMode.high',
    /reversed/,
    /3 or more/,
  ],
  [
    'reversed absolute limits',
    withValue('converter.absolute', { low: 3.6, high: -0.3 }),
    'converter.absolute.high',
    /reversed/,
    /above 3.6/,
  ],
  [
    'a reversed window of resistors',
    withValue('parts.resistors', { minimum: 1e5, maximum: 1e4 }),
    'parts.resistors.maximum',
    /reversed/,
    /100000 or more, in Ω/,
  ],
  [
    'a window of resistors without end',
    withValue('parts.resistors', { minimum: 0.01, maximum: 1e9 }),
    'parts.resistors.minimum',
    /more than 8 decades/,
    /in Ω/,
  ],
  [
    'a reversed window of capacitors',
    withValue('parts.capacitors', { minimum: 1e-6, maximum: 1e-9 }),
    'parts.capacitors.maximum',
    /reversed/,
    /in F/,
  ],
  [
    'a reversed range of gains',
    withValue('parts.instrumentation', { gainMinimum: 100, gainMaximum: 10 }),
    'parts.instrumentation.gainMaximum',
    /reversed/,
    /100 or more/,
  ],
  [
    'a reversed supply range',
    withValue('parts.amplifier', { minimumSupply: 12, maximumSupply: 5 }),
    'parts.amplifier.maximumSupply',
    /reversed/,
    /12 or more/,
  ],
  [
    'readings beyond that lie inside the span',
    withValue('sensor.beyond', { low: 0, high: 0.4 }),
    'sensor.beyond.low',
    /inside the span/,
    /past -0.35/,
  ],
  [
    'a reversed fault range',
    withValue('sensor.fault', { low: 30, high: -30 }),
    'sensor.fault.high',
    /reversed/,
    /above 30/,
  ],
]

const references: Row[] = [
  [
    'a shared reference with another voltage',
    withValue('shiftReference', { same: 'converter', voltage: 2.048 }),
    'shiftReference.voltage',
    /same source, yet 2.048 V is not 2.5 V/,
    /2.5, in V, or leave it out/,
  ],
  [
    'a rail as reference with another voltage',
    withValue('shiftReference', { same: 'positive', voltage: 2.5 }),
    'shiftReference.voltage',
    /same source, yet 2.5 V is not 5 V/,
    /5, in V/,
  ],
  [
    'a converter reference that is the rail with another voltage',
    withValue('converter.reference', { voltage: 2.5, same: 'positive' }),
    'converter.reference.voltage',
    /is the positive rail, yet 2.5 V is not 5 V/,
    /5, in V/,
  ],
  [
    'a converter reference that is itself',
    withValue('converter.reference', { voltage: 2.5, same: 'converter' }),
    'converter.reference.same',
    /only be the positive rail/,
    /"positive"/,
  ],
  [
    'a share of a reference that is not there',
    { ...without('converter.reference'), shiftReference: { same: 'converter' } },
    'shiftReference.same',
    /no reference to share/,
    /converter.reference/,
  ],
  [
    'a reference that is itself',
    withValue('shiftReference', { same: 'shift', voltage: 2 }),
    'shiftReference.same',
    /cannot be itself/,
    /"converter" or "positive"/,
  ],
  [
    'a reference without a voltage',
    withValue('shiftReference', {}),
    'shiftReference.voltage',
    /no voltage/,
    /above 0, in V/,
  ],
  [
    'a reference that drifts away altogether',
    withValue('converter.reference', { voltage: 2.5, tolerance: 0.9, drift: 0.01 }),
    'converter.reference.drift',
    /100 % or more/,
    /above 0 V/,
  ],
  [
    'an excitation shared with another voltage',
    buildDesign({ sensor: { ...bridge, kind: 'bridge', excitation: { voltage: 3, same: 'converter' } } }),
    'sensor.excitation.voltage',
    /same source, yet 3 V is not 2.5 V/,
    /2.5, in V/,
  ],
  [
    'an excitation without a voltage',
    buildDesign({ sensor: { ...bridge, kind: 'bridge', excitation: {} } }),
    'sensor.excitation.voltage',
    /no voltage/,
    /above 0, in V/,
  ],
  [
    'an excitation of zero',
    buildDesign({ sensor: { ...bridge, kind: 'bridge', excitation: 0 } }),
    'sensor.excitation',
    /excitation voltage is 0/,
    /above 0 up to 100, in V/,
  ],
  [
    'a differential signal without its common mode',
    buildDesign({ sensor: buildSensor(0, 1, { wiring: 'differential' }) }),
    'sensor.commonMode',
    /needs its common mode/,
    /low and high, in V/,
  ],
  [
    'a common mode of a single wire',
    withValue('sensor.commonMode', { low: 0, high: 1 }),
    'sensor.commonMode',
    /has no common mode/,
    /differential/,
  ],
]

const shapes: Row[] = [
  ['an unknown key at the top', withValue('colour', 'red'), 'colour', /not known/, /notes/],
  ['an unknown key in a branch', withValue('rails.colour', 'red'), 'rails.colour', /not known/, /notes/],
  ['an unknown key in the sensor', withValue('sensor.colour', 1), 'sensor.colour', /not known/, /notes/],
  [
    'an unknown key three levels down',
    withValue('parts.amplifier.cin.colour', 1),
    'parts.amplifier.cin.colour',
    /not known/,
    /notes/,
  ],
  [
    'a key of another sensor kind',
    withValue('sensor.excitation', 5),
    'sensor.excitation',
    /not known/,
    /notes/,
  ],
  [
    'an unknown key in a list',
    withValue('choose.stages', [{ ref: 'S1', colour: 1 }]),
    'choose.stages[0].colour',
    /not known/,
    /notes/,
  ],
  [
    'a __proto__ key at the top',
    JSON.parse(`{"__proto__":{"rails":{"positive":9}},${JSON.stringify(buildDesign()).slice(1)}`),
    '__proto__',
    /not known/,
    /notes/,
  ],
  [
    'a __proto__ key in a branch',
    JSON.parse(JSON.stringify(buildDesign()).replace('"rails":{', '"rails":{"__proto__":{"tolerance":0},')),
    'rails.__proto__',
    /not known/,
    /notes/,
  ],
  ['a constructor key', withValue('constructor', {}), 'constructor', /not known/, /notes/],
  ['a missing branch', without('rails'), 'rails', /is missing/, /an object/],
  [
    'a missing number',
    without('converter.bits'),
    'converter.bits',
    /converter bits is missing/,
    /whole number/,
  ],
  ['a missing name', without('name'), 'name', /is missing/, /text of 1 to 120/],
  ['a missing end of the span', without('sensor.output.high'), 'sensor.output.high', /is missing/, /in V/],
  ['a missing kind', without('sensor.kind'), 'sensor.kind', /missing or not known/, /"voltage", "bridge"/],
  [
    'an unknown kind',
    withValue('sensor.kind', 'dial'),
    'sensor.kind',
    /missing or not known/,
    /"voltage", "bridge"/,
  ],
  [
    'an unknown choice',
    withValue('converter.coding', 'gray'),
    'converter.coding',
    /"gray" is not one/,
    /"straight", "offset", "twos"/,
  ],
  ['a list for a branch', withValue('rails', []), 'rails', /wrong type/, /an object/],
  ['text for a branch', withValue('sensor', 'bridge'), 'sensor', /wrong type|missing/, /object|"voltage"/],
  [
    'text for an excitation',
    buildDesign({ sensor: { ...bridge, kind: 'bridge', excitation: 'five' as unknown as number } }),
    'sensor.excitation',
    /neither of the accepted forms/,
    /a number in V, or an object/,
  ],
  ['a newer format', withValue('format', 'spandrel-design/2'), 'format', /newer/, /"spandrel-design\/1"/],
  [
    'another format',
    withValue('format', 'netlist/1'),
    'format',
    /missing or unknown/,
    /"spandrel-design\/1"/,
  ],
  ['no format', without('format'), 'format', /missing or unknown/, /"spandrel-design\/1"/],
  [
    'one stage described twice',
    withValue('choose.stages', [{ ref: 'S1' }, { ref: 'S1' }]),
    'choose.stages',
    /twice/,
    /S1 and S2/,
  ],
  ['a list at the top', [], '', /not a design file/, /JSON object/],
  ['text at the top', 'spandrel-design/1', '', /not a design file/, /JSON object/],
  ['null at the top', null, '', /not a design file/, /JSON object/],
  ['a number at the top', 5, '', /not a design file/, /JSON object/],
  ['nothing at the top', undefined, '', /not a design file/, /JSON object/],
]

const notes: Row[] = [
  [
    'an infinity in the notes',
    withValue('notes', { by: [1, Infinity] }),
    'notes.by[1]',
    /infinite/,
    /finite number/,
  ],
  [
    'half a character in the notes',
    withValue('notes', { by: '\ud800' }),
    'notes.by',
    /half a character/,
    /Unicode/,
  ],
  [
    'notes without end',
    withValue('notes', { by: JSON.parse('['.repeat(5000) + ']'.repeat(5000)) }),
    'notes',
    /too deep/,
    /32 levels/,
  ],
]

const currents: Row[] = [
  [
    'a bias current that doubles every fraction of a kelvin',
    withValue('parts.amplifier', { ibDoubling: 1e-3 }),
    'parts.amplifier.ibDoubling',
    /would pass 1 A/,
    /kelvins/,
  ],
  [
    'a lowest frequency above the bandwidth',
    withValue('sensor.bandLow', 100),
    'sensor.bandLow',
    /not below the signal bandwidth/,
    /below 20, in Hz/,
  ],
]

describe.each([
  ['numbers', notANumber],
  ['ranges', outOfRange],
  ['spans', spans],
  ['order', reversed],
  ['references and wiring', references],
  ['shape', shapes],
  ['notes', notes],
  ['parts', [...parts, ...currents]],
])('a document with wrong %s', (_, rows) => {
  it.each(rows)(
    'is refused for %s: path, reason and what is accepted',
    (_what, document, path, reason, accepted) => {
      const faults = faultsOf(document)
      const fault = faults.find((f) => f.path === path)
      expect(fault, JSON.stringify(faults)).toBeDefined()
      expect(fault?.reason).toMatch(reason)
      expect(fault?.accepted).toMatch(accepted)
      expect(faults.length, JSON.stringify(faults)).toBe(1)
    },
  )

  it.each(rows)('is refused by the engine too for %s', (_what, document) => {
    expect(() => planDesign(document)).toThrow(DesignRefused)
  })
})

function faultsOf(document: unknown): Fault[] {
  const read = readDesign(document)
  if (read.ok) throw new Error('the document was accepted')
  return read.faults
}

describe('a document with several faults', () => {
  it('has one line for each', () => {
    const document = withValue(
      'rails.positive',
      NaN,
      withValue('converter.bits', 99, withValue('sensor.speed', 1)),
    )
    expect(
      faultsOf(document)
        .map((f) => f.path)
        .sort(),
    ).toEqual(['converter.bits', 'rails.positive', 'sensor.speed'])
  })

  it('names them all in the error that the engine throws', () => {
    const document = withValue('rails.positive', NaN, withValue('converter.bits', 99))
    expect(() => planDesign(document)).toThrow(
      /rails\.positive: [^\n]+\nconverter\.bits|converter\.bits: [^\n]+\nrails/,
    )
  })
})

describe('reading', () => {
  it('leaves the prototype of objects alone', () => {
    readDesign(
      JSON.parse(
        '{"format":"spandrel-design/1","__proto__":{"polluted":true},"constructor":{"prototype":{"polluted":true}}}',
      ),
    )
    expect(({} as Json).polluted).toBeUndefined()
  })

  it('takes an excitation from the shift reference that is the positive rail', () => {
    const read = readDesign(
      buildDesign({
        sensor: { ...bridge, kind: 'bridge', excitation: { voltage: 5, same: 'shift' } },
        shiftReference: { same: 'positive' },
      }),
    )
    expect(read.ok).toBe(true)
  })

  it('changes nothing in what it is given', () => {
    const document = buildDesign()
    const before = JSON.stringify(document)
    readDesign(document)
    expect(JSON.stringify(document)).toBe(before)
  })
})
