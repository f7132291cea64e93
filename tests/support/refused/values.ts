import { buildDesign } from '../designs.ts'
import { bridge, withValue, type Row } from './rows.ts'

export const notANumber: Row[] = [
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

export const outOfRange: Row[] = [
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

export const parts: Row[] = [
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

export const spans: Row[] = [
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

export const notes: Row[] = [
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

export const currents: Row[] = [
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
