import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { parseQuantity, type ParseOptions } from '#shared/units/parse-quantity.ts'

const read = (text: string, unit: string, more: Partial<ParseOptions> = {}) =>
  parseQuantity(text, { unit, ...more })

const accepted: [text: string, unit: string, value: number, readAs: string][] = [
  ['4k7', 'Ω', 4700, '4.7 kΩ'],
  ['4K7', 'Ω', 4700, '4.7 kΩ'],
  ['4,7k', 'Ω', 4700, '4.7 kΩ'],
  ['4.7 kΩ', 'Ω', 4700, '4.7 kΩ'],
  ['4.7\u00a0k\u2126', 'Ω', 4700, '4.7 kΩ'],
  ['4.7 kohm', 'Ω', 4700, '4.7 kΩ'],
  ['4700', 'Ω', 4700, '4.7 kΩ'],
  ['4 700', 'Ω', 4700, '4.7 kΩ'],
  ['1 000 000', 'Ω', 1e6, '1 MΩ'],
  ['1,234,567', 'Ω', 1234567, '1.234 567 MΩ'],
  ['1,234.5', 'Ω', 1234.5, '1.2345 kΩ'],
  ['1.234,5', 'Ω', 1234.5, '1.2345 kΩ'],
  ['1,5 kΩ', 'Ω', 1500, '1.5 kΩ'],
  ['R47', 'Ω', 0.47, '0.47 Ω'],
  ['4R7', 'Ω', 4.7, '4.7 Ω'],
  ['470R', 'Ω', 470, '470 Ω'],
  ['4L7', 'Ω', 0.0047, '4.7 mΩ'],
  ['4m7', 'Ω', 0.0047, '4.7 mΩ'],
  ['1M0', 'Ω', 1e6, '1 MΩ'],
  ['2G2', 'Ω', 2.2e9, '2.2 GΩ'],
  ['10K', 'Ω', 1e4, '10 kΩ'],
  ['10 K', 'Ω', 1e4, '10 kΩ'],
  ['4k7Ω', 'Ω', 4700, '4.7 kΩ'],
  ['1e3', 'Ω', 1000, '1 kΩ'],
  ['4n7', 'F', 4.7e-9, '4.7 nF'],
  ['4n7F', 'F', 4.7e-9, '4.7 nF'],
  ['10p', 'F', 1e-11, '10 pF'],
  ['u47', 'F', 4.7e-7, '470 nF'],
  ['\u03bc47', 'F', 4.7e-7, '470 nF'],
  ['1\u00b50', 'F', 1e-6, '1 μF'],
  ['100 nF', 'F', 1e-7, '100 nF'],
  ['0.1uF', 'F', 1e-7, '100 nF'],
  ['0,4625', 'V', 0.4625, '0.4625 V'],
  ['462,5 mV', 'V', 0.4625, '0.4625 V'],
  ['4.625e-1', 'V', 0.4625, '0.4625 V'],
  ['462m5', 'V', 0.4625, '0.4625 V'],
  ['2V5', 'V', 2.5, '2.5 V'],
  ['22m', 'V', 0.022, '22 mV'],
  ['\u22120.35', 'V', -0.35, '−0.35 V'],
  ['-22m', 'V', -0.022, '−22 mV'],
  ['.5', 'V', 0.5, '0.5 V'],
  ['5.', 'V', 5, '5 V'],
  ['10 MHz', 'Hz', 1e7, '10 MHz'],
  ['20 mA', 'A', 0.02, '20 mA'],
  ['2u5', 's', 2.5e-6, '2.5 μs'],
  ['8 nV/√Hz', 'V/√Hz', 8e-9, '8 nV/√Hz'],
  ['8nV/rtHz', 'V/√Hz', 8e-9, '8 nV/√Hz'],
  ['5 V/us', 'V/s', 5e6, '5 V/μs'],
  ['2 uV/K', 'V/K', 2e-6, '2 μV/K'],
  ['2 uV/°C', 'V/K', 2e-6, '2 μV/K'],
  ['25 ppm/K', '1/K', 2.5e-5, '25 ppm/K'],
  ['25ppm', '1/K', 2.5e-5, '25 ppm/K'],
  ['20 °C', '°C', 20, '20 °C'],
  ['-10', '°C', -10, '−10 °C'],
  ['5 m', 'm', 5, '5 m'],
  ['15 mm', 'm', 0.015, '15 mm'],
  ['5.2', 'mS/cm', 5.2, '5.2 mS/cm'],
  ['5.2 mS/cm', 'mS/cm', 5.2, '5.2 mS/cm'],
  ['50', '%', 50, '50 %'],
  ['100.8', 'V/V', 100.8, '100.8'],
  ['14', '', 14, '14'],
  ['0', 'V', 0, '0 V'],
]

describe('reading a quantity', () => {
  it.each(accepted)('reads %s in %s', (text, unit, value, readAs) => {
    const plain = readAs.replaceAll(' ', '\u00a0')
    expect(read(text, unit)).toEqual({ ok: true, value, readAs: plain })
  })

  it.each([
    ['5', 0.05],
    ['0.1 %', 0.001],
    ['100 ppm', 1e-4],
    ['0,5', 0.005],
  ])('reads %s in per cent as a fraction', (text, value) => {
    expect(read(text, '', { display: 'percent' })).toMatchObject({ ok: true, value })
  })

  it.each([
    ['4k7F', 'Ω', 4700, 0.01],
    ['4k7 F', 'Ω', 4700, 0.01],
    ['10k F', 'Ω', 1e4, 0.01],
    ['4700 J', 'Ω', 4700, 0.05],
    ['4k7B', 'Ω', 4700, 0.001],
    ['4k7 1 %', 'Ω', 4700, 0.01],
    ['4.7 kΩ ±0.1%', 'Ω', 4700, 0.001],
    ['4n7K', 'F', 4.7e-9, 0.1],
    ['10n K', 'F', 1e-8, 0.1],
    ['4n7 J', 'F', 4.7e-9, 0.05],
  ])('reads the tolerance in %s', (text, unit, value, tolerance) => {
    expect(read(text, unit)).toMatchObject({ ok: true, value, tolerance })
  })

  it.each([
    ['1 kV', 'Ω', '1 kΩ', 1000],
    ['2.2 mA', 'V', '2.2 mV', 0.0022],
    ['5 kΩ', 'V', '5 kV', 5000],
  ])('keeps the prefix of %s where the unit does not fit %s', (text, unit, label, value) => {
    const result = read(text, unit)
    if (result.ok) throw new Error('it was taken')
    expect(result.choices).toEqual([{ label: label.replace(' ', '\u00a0'), value }])
    expect(result.reason).toContain(label.replace(' ', '\u00a0'))
  })

  it('never takes a tolerance letter that is glued to a bare prefix', () => {
    expect(read('10nK', 'F')).toMatchObject({ ok: false })
    expect(read('10kF', 'Ω')).toMatchObject({ ok: false })
  })

  it('refuses 10K in farads and gives both readings', () => {
    const result = read('10K', 'F')
    expect(result).toMatchObject({ ok: false, choices: [{ value: 1e4 }, { value: 10 }] })
    expect(!result.ok && result.reason).toContain('10 %'.replace(' ', '\u00a0'))
  })

  it.each([
    ['1,000', 1, ',', 1000, '.'],
    ['1.000', 1, '.', 1000, ','],
    ['12,345', 12.345, ',', 12345, '.'],
    ['-4.096', -4.096, '.', -4096, ','],
  ])(
    'asks whether %s is grouped, with the sign that each answer stands for',
    (text, first, sign, second, other) => {
      expect(read(text, 'V')).toMatchObject({
        ok: false,
        choices: [
          { value: first, decimalSign: sign },
          { value: second, decimalSign: other },
        ],
      })
    },
  )

  it('follows the decimal sign that is set instead of asking again', () => {
    expect(read('1,000', 'V', { decimalSign: '.' })).toMatchObject({ ok: true, value: 1000 })
    expect(read('1,000', 'V', { decimalSign: ',' })).toMatchObject({ ok: true, value: 1 })
    expect(read('4.096', 'V', { decimalSign: '.' })).toMatchObject({ ok: true, value: 4.096 })
  })

  it('reads both signs as the decimal sign wherever only that makes sense, whichever is set', () => {
    for (const decimalSign of ['.', ','] as const) {
      expect(read('0.123', 'V', { decimalSign })).toMatchObject({ value: 0.123 })
      expect(read('0,123', 'V', { decimalSign })).toMatchObject({ value: 0.123 })
      expect(read('2,5', 'V', { decimalSign })).toMatchObject({ value: 2.5 })
      expect(read('1234.567', 'V', { decimalSign })).toMatchObject({ value: 1234.567 })
    }
  })

  it('tells milli and mega apart by case and never guesses', () => {
    expect(read('5m', 'V')).toMatchObject({ value: 0.005 })
    expect(read('5M', 'V')).toMatchObject({ value: 5e6 })
    expect(read('10 mHz', 'Hz')).toMatchObject({ value: 0.01 })
  })

  it('asks where a letter is both the prefix and the unit', () => {
    expect(read('5m2', 'm')).toMatchObject({ ok: false, choices: [{ value: 5.2 }, { value: 0.0052 }] })
    expect(read('5m', 'm')).toMatchObject({ ok: true, value: 5 })
  })

  it.each([
    ['5 A', 'V', 'a current', 'a voltage'],
    ['5 Ω', 'V', 'a resistance', 'a voltage'],
    ['5 V', 'Ω', 'a voltage', 'a resistance'],
    ['4700F', 'Ω', 'a capacitance', 'a resistance'],
    ['3 Hz', 's', 'a frequency', 'a time'],
  ])('refuses %s in %s, names both quantities and offers the bare number', (text, unit, is, takes) => {
    const result = read(text, unit)
    expect(result.ok).toBe(false)
    if (result.ok) return
    expect(result.reason).toContain(is)
    expect(result.reason).toContain(takes)
    expect(result.choices?.[0]?.value).toBe(Number.parseFloat(text))
  })

  it.each([
    '',
    ' ',
    'abc',
    '--5',
    '4.7.3',
    '12 34',
    '1 0000',
    '0x10',
    '1e5e5',
    '4k7X',
    '4 k 7',
    '5e400',
    '∞',
    '1e',
    'NaN',
  ])('refuses %j with a reason and what is accepted', (text) => {
    const result = read(text, 'V')
    expect(result.ok).toBe(false)
    if (result.ok) return
    expect(result.reason.length).toBeGreaterThan(5)
    expect(result.accepted).toMatch(/^a number/)
  })

  it('never throws and never gives a value that is not finite, whatever is typed', () => {
    const unit = fc.constantFrom(
      'Ω',
      'F',
      'V',
      'A',
      'Hz',
      's',
      '°C',
      '%',
      '',
      'm',
      '1/K',
      'V/√Hz',
      'NTU',
      '1/year',
    )
    const soup = fc.string({
      unit: fc.constantFrom(...'0123456789.,-+−eEkKmMGRLnpuμµΩFVAHz%/ √°CJ='),
      maxLength: 12,
    })
    fc.assert(
      fc.property(fc.oneof(fc.string(), soup), unit, fc.boolean(), (text, u, percent) => {
        const result = read(text, u, percent ? { display: 'percent' } : {})
        if (result.ok) expect(Number.isFinite(result.value)).toBe(true)
        else expect(result.reason).not.toBe('')
      }),
      { numRuns: 3000 },
    )
  })
})
