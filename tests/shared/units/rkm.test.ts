import { describe, expect, it } from 'vitest'
import { standardValues } from '#shared/parts/series.ts'
import { parseQuantity } from '#shared/units/parse-quantity.ts'
import { fromRkm, toleranceOf, toRkm } from '#shared/units/rkm.ts'

describe('codes of IEC 60062', () => {
  it.each([
    [0.47, 'R47'],
    [0.047, 'R047'],
    [1, '1R0'],
    [4.7, '4R7'],
    [10, '10R'],
    [100, '100R'],
    [499, '499R'],
    [1000, '1k0'],
    [4700, '4k7'],
    [24900, '24k9'],
    [1e5, '100k'],
    [1e6, '1M0'],
    [2.2e9, '2G2'],
    [0, '0R'],
  ])('prints %s ohms', (value, code) => {
    expect(toRkm(value, 'Ω')).toBe(code)
  })

  it.each([
    [4.7e-13, 'p47'],
    [1e-11, '10p'],
    [4.7e-9, '4n7'],
    [1e-7, '100n'],
    [4.7e-7, '470n'],
    [1e-6, '1μ0'],
    [4.7e-3, '4m7'],
    [1, '1F0'],
  ])('prints %s farads', (value, code) => {
    expect(toRkm(value, 'F')).toBe(code)
  })

  it('prints a question mark for what is no value', () => {
    expect(toRkm(Number.NaN, 'Ω')).toBe('?')
    expect(toRkm(-5, 'Ω')).toBe('?')
    expect(toRkm(Number.POSITIVE_INFINITY, 'F')).toBe('?')
  })

  it('keeps the digits of an unusual value up to the number asked for', () => {
    expect(toRkm(4702.3, 'Ω')).toBe('4k7023')
    expect(toRkm(10000 / 3, 'Ω', 4)).toBe('3k333')
  })

  it('reads back every E192 value of every decade, exactly, as a code and as typed in a field', () => {
    for (const value of standardValues('E192', 0.1, 9.99e11)) {
      const code = toRkm(value, 'Ω')
      expect(fromRkm(code, 'Ω'), code).toBe(value)
      expect(parseQuantity(code, { unit: 'Ω' }), code).toMatchObject({ ok: true, value })
    }
    for (const value of standardValues('E192', 1e-13, 9.99e-3)) {
      const code = toRkm(value, 'F')
      expect(fromRkm(code, 'F'), code).toBe(value)
      expect(parseQuantity(code, { unit: 'F' }), code).toMatchObject({ ok: true, value })
    }
  })

  it('reads no code where there is none', () => {
    for (const text of ['', 'k', '4', '4k7k', '4.7k', 'x7', '4n7']) expect(fromRkm(text, 'Ω')).toBeNull()
    expect(fromRkm('4k7', 'F')).toBeNull()
  })

  it('knows the tolerance letters', () => {
    expect(toleranceOf('B')).toBe(0.001)
    expect(toleranceOf('F')).toBe(0.01)
    expect(toleranceOf('K')).toBe(0.1)
    expect(toleranceOf('X')).toBeNull()
  })
})
