import { describe, expect, it } from 'vitest'
import { standardValues } from '#shared/parts/series.ts'
import { stepQuantity } from '#shared/units/step-quantity.ts'

describe('stepping a value with Up and Down', () => {
  it.each<[string, string, 1 | -1, boolean, string, number]>([
    ['4k7', 'Ω', 1, false, '4k8', 4800],
    ['4k9', 'Ω', 1, false, '5k0', 5000],
    ['R47', 'Ω', 1, false, 'R48', 0.48],
    ['0.350', 'V', 1, false, '0.351', 0.351],
    ['3.75', '', -1, true, '3.65', 3.65],
    ['22m', 'V', 1, false, '23m', 0.023],
    ['2.2 mV', 'V', -1, false, '2.1 mV', 0.0021],
    ['0', 'V', -1, false, '−1', -1],
    ['−0.1', 'V', 1, true, '0.9', 0.9],
    ['-0.5', 'V', 1, false, '-0.4', -0.4],
    ['9', '', 1, false, '10', 10],
    ['10', '', -1, true, '0', 0],
    ['0,5', 'V', 1, false, '0,6', 0.6],
    ['4.625e-1', 'V', 1, false, '4.626e-1', 0.4626],
    ['1 000 000', 'Ω', 1, false, '1000001', 1000001],
  ])('goes from %s %s by %s (large: %s) to %s', (text, unit, direction, large, next, value) => {
    expect(stepQuantity(text, null, { unit, direction, large })).toEqual({ text: next, value })
  })

  it('goes along a list of standard values, ten with Shift, and stays within it', () => {
    const standard = standardValues('E24', 1000, 10000)
    const step = (text: string, direction: 1 | -1, large = false) =>
      stepQuantity(text, null, { unit: 'Ω', direction, large, standard })?.value
    expect(step('4k7', 1)).toBe(5100)
    expect(step('4k7', -1)).toBe(4300)
    expect(step('4k75', 1)).toBe(5100)
    expect(step('4k75', -1)).toBe(4700)
    expect(step('1k', 1, true)).toBe(2700)
    expect(step('9k1', 1, true)).toBe(10000)
    expect(step('1k', -1)).toBe(1000)
  })

  it('steps the value of a formula, and nothing where nothing can be read', () => {
    expect(stepQuantity('=2*3', 6, { unit: '', direction: 1 })).toEqual({ text: '7', value: 7 })
    expect(stepQuantity('abc', 6, { unit: '', direction: 1 })).toBeNull()
    expect(stepQuantity('', null, { unit: 'V', direction: 1 })).toBeNull()
  })
})
