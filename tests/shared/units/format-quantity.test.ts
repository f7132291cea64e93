import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import {
  formatEditable,
  formatNumber,
  formatOf,
  formatQuantity,
  formatRange,
  formatRoom,
  type FormatOptions,
} from '#shared/units/format-quantity.ts'
import { parseQuantity } from '#shared/units/parse-quantity.ts'

const spaced = (text: string) => text.replaceAll(' ', '\u00a0')

describe('writing a quantity', () => {
  it.each<[number, string, FormatOptions, string]>([
    [4700, 'Ω', {}, '4.7 kΩ'],
    [0.47, 'Ω', {}, '0.47 Ω'],
    [0.0047, 'Ω', {}, '4.7 mΩ'],
    [999.96, 'Ω', {}, '1 kΩ'],
    [1e12, 'Ω', {}, '1 TΩ'],
    [1e-7, 'F', {}, '100 nF'],
    [-0.00022, 'V', {}, '−220 μV'],
    [0.4625, 'V', {}, '0.4625 V'],
    [0.38, 'V', { zeros: 'keep' }, '0.3800 V'],
    [0, 'V', {}, '0 V'],
    [1e7, 'Hz', {}, '10 MHz'],
    [2.5e-5, '1/K', {}, '25 ppm/K'],
    [5e6, 'V/s', {}, '5 V/μs'],
    [8e-9, 'V/√Hz', {}, '8 nV/√Hz'],
    [0.05, '', { display: 'percent' }, '5 %'],
    [50, '%', {}, '50 %'],
    [360, '°', {}, '360°'],
    [20, '°C', {}, '20 °C'],
    [100.79959, 'V/V', {}, '100.8'],
    [0.015, 'm', {}, '15 mm'],
    [5.2, 'm', {}, '5.2 m'],
    [5.2, 'mS/cm', {}, '5.2 mS/cm'],
    [57838, '', {}, '57 838'],
    [1234, '', {}, '1234'],
    [0.12345678, '', { digits: 8 }, '0.123 456 78'],
    [2.5, 'V', { decimalSign: ',' }, '2,5 V'],
  ])('writes %s %s', (value, unit, options, text) => {
    expect(formatQuantity(value, unit, options)).toBe(spaced(text))
  })

  it('says "not known" for what is no finite number', () => {
    expect(formatQuantity(Number.NaN, 'V')).toBe('not known')
    expect(formatQuantity(Number.POSITIVE_INFINITY, 'Ω')).toBe('not known')
  })

  it('rounds in the direction asked for, on the decimal digits and not on the binary form', () => {
    expect(formatQuantity(0.3, 'V', { rounding: 'down' })).toBe(spaced('0.3 V'))
    expect(formatQuantity(0.1 + 0.2, 'V', { rounding: 'up' })).toBe(spaced('0.3 V'))
    expect(formatQuantity(5.01672, 'm', { rounding: 'down' })).toBe(spaced('5.016 m'))
    expect(formatQuantity(5.01612, 'm', { rounding: 'up' })).toBe(spaced('5.017 m'))
    expect(formatQuantity(-0.26812, 'm', { rounding: 'up' })).toBe(spaced('−0.2681 m'))
    expect(formatQuantity(-0.26812, 'm', { rounding: 'down' })).toBe(spaced('−0.2682 m'))
    expect(formatQuantity(-0.26812, 'm', { rounding: 'inward' })).toBe(spaced('−0.2681 m'))
    expect(formatQuantity(-0.26812, 'm', { rounding: 'outward' })).toBe(spaced('−0.2682 m'))
  })

  it('keeps the number and its unit on one line', () => {
    expect(formatQuantity(1e5 / 3, '', { digits: 9 })).not.toContain(' ')
    expect(formatQuantity(2.5, 'V')).toBe('2.5\u00a0V')
  })

  it('writes plain numbers', () => {
    expect(formatNumber(-12345.678, { digits: 8 })).toBe(spaced('−12 345.678'))
  })
})

describe('writing a range', () => {
  it.each<[number, number, string, Parameters<typeof formatRange>[3], string]>([
    [-0.1, 5.2, 'm', { digits: 3, zeros: 'keep' }, '−0.10 m to 5.20 m'],
    [-0.1, 5.2, 'm', {}, '−0.1 m to 5.2 m'],
    [0.38, 1.448, 'V', { zeros: 'keep' }, '0.380 V to 1.448 V'],
    [0.228, 4.2351, 'V', { unitOnce: true }, '0.228 to 4.235 V'],
    [-0.0002, 0.0104, 'V', { unitOnce: true }, '−0.2 to 10.4 mV'],
    [0, 2, 'mS/cm', { unitOnce: true }, '0 to 2 mS/cm'],
    [-0.35, 0.35, 'V', {}, '−0.35 V to 0.35 V'],
    [100, 212, 'Ω', {}, '100 Ω to 212 Ω'],
    [Number.NaN, 1, 'V', {}, 'not known'],
  ])('writes %s to %s %s', (low, high, unit, options, text) => {
    expect(formatRange(low, high, unit, options).replaceAll('\u00a0', ' ')).toBe(text)
  })

  it('rounds inward or outward at both ends, whichever end is larger', () => {
    const words = (low: number, high: number, rounding: 'inward' | 'outward') =>
      formatRange(low, high, 'V', { rounding, unitOnce: true }).replaceAll('\u00a0', ' ')
    expect(words(1.23456, 4.98765, 'inward')).toBe('1.235 to 4.987 V')
    expect(words(1.23456, 4.98765, 'outward')).toBe('1.234 to 4.988 V')
    expect(words(4.98765, 1.23456, 'inward')).toBe('4.987 to 1.235 V')
    expect(words(-1.23456, -0.98765, 'inward')).toBe('−1.234 to −0.988 V')
  })
})

describe('writing a figure against the one it is held to', () => {
  it.each<[number, number, string, string]>([
    [0.01192, 0.015, 'm', '12 of 15 mm'],
    [0.0094, 0.2, 'm', '0.0094 of 0.2 m'],
    [0.0611, 0.1, '°C', '0.062 of 0.1 °C'],
    [17.2, 20, 'NTU', '18 of 20 NTU'],
    [Number.NaN, 20, 'NTU', 'not known'],
  ])('writes %s of %s %s', (value, whole, unit, text) => {
    expect(formatOf(value, whole, unit, { rounding: 'up' }).replaceAll('\u00a0', ' ')).toBe(text)
  })
})

describe('writing room', () => {
  it.each([
    [0.0568, '5.6 %'],
    [0.03, '3.0 %'],
    [0.13799999, '13.7 %'],
    [0.1, '10.0 %'],
    [0, '0.0 %'],
    [-0.0341, '3.5 % over'],
    [-1e-9, '0.1 % over'],
    [Number.NaN, 'not known'],
  ])('writes %s never better than it is', (fraction, text) => {
    expect(formatRoom(fraction)).toBe(text.replace(' %', '\u00a0%'))
  })

  it('prints at most what there is, over all fractions', () => {
    fc.assert(
      fc.property(fc.double({ min: -2, max: 1, noNaN: true }), (fraction) => {
        const text = formatRoom(fraction)
        const printed = Number.parseFloat(text) / (text.endsWith('over') ? -100 : 100)
        expect(printed).toBeLessThanOrEqual(fraction + 1e-12)
        expect(fraction - printed).toBeLessThan(0.001 + 1e-12)
      }),
    )
  })
})

describe('text of a field', () => {
  it.each<[number, string, string]>([
    [4700, 'Ω', '4.7 k'],
    [4.7e-9, 'F', '4.7 n'],
    [0.4625, 'V', '0.4625'],
    [-0.35, 'V', '−0.35'],
    [0.022, 'V', '22 m'],
    [1e7, 'Hz', '10 M'],
    [2.5e-5, '1/K', '25 ppm'],
    [5e6, 'V/s', '5 M'],
    [0, 'V', '0'],
    [1e-8, 'Ω or F', '10 n'],
    [1e4, 'Ω or F', '10 k'],
  ])('shows %s %s as %s', (value, unit, text) => {
    expect(formatEditable(value, unit)).toBe(spaced(text))
  })

  it('shows a fraction in per cent', () => {
    expect(formatEditable(0.001, '', { display: 'percent' })).toBe('0.1')
  })

  it('reads back as the same double, for every unit and either decimal sign', () => {
    const units = [
      'Ω',
      'F',
      'V',
      'A',
      'Hz',
      's',
      '',
      'm',
      'V/V',
      '1/K',
      'V/√Hz',
      'V/s',
      '°C',
      'LSB',
      'dB',
      'NTU',
      '%',
    ]
    fc.assert(
      fc.property(
        fc.double({ min: -1e15, max: 1e15, noNaN: true }),
        fc.integer({ min: -15, max: 0 }),
        fc.constantFrom(...units),
        fc.constantFrom<'.' | ','>('.', ','),
        (mantissa, exponent, unit, decimalSign) => {
          const value = mantissa * 10 ** exponent
          const result = parseQuantity(formatEditable(value, unit, { decimalSign }), { unit, decimalSign })
          expect(result).toMatchObject({ ok: true, value: value === 0 ? 0 : value })
        },
      ),
      { numRuns: 2000 },
    )
  })

  it('reads back in per cent too', () => {
    fc.assert(
      fc.property(fc.double({ min: 0, max: 1, noNaN: true }), (value) => {
        const text = formatEditable(value, '', { display: 'percent', decimalSign: '.' })
        const result = parseQuantity(text, { unit: '', display: 'percent', decimalSign: '.' })
        expect(result).toMatchObject({ ok: true, value: value === 0 ? 0 : value })
      }),
    )
  })
})
