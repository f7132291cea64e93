import { describe, expect, it } from 'vitest'
import {
  asksDecimalSign,
  followOutside,
  readShown,
  readText,
  startText,
  unitSuffix,
  type FieldUnit,
} from '#client/components/value-field-state.ts'

const ohms: FieldUnit = { unit: 'Ω' }
const volts: FieldUnit = { unit: 'V' }

describe('text of a value field', () => {
  it('starts with the value as it can be edited, or with the text that was kept', () => {
    expect(startText(4700, undefined, ohms).text).toBe('4.7\u00a0k')
    expect(startText(null, undefined, ohms).text).toBe('')
    expect(startText(4700, '4k7', ohms).text).toBe('4k7')
  })

  it('leaves typed text alone while it means the value that is set', () => {
    const typed = { text: '4k7', value: 4700, given: undefined }
    expect(followOutside(typed, 4700, undefined, ohms)).toBe(typed)
  })

  it('keeps text that cannot be read while the value stays', () => {
    const typed = { text: '4k', value: 4700, given: undefined }
    expect(followOutside({ ...typed, text: 'abc' }, 4700, undefined, ohms).text).toBe('abc')
  })

  it('shows a value that came from elsewhere', () => {
    const typed = { text: '4k7', value: 4700, given: undefined }
    expect(followOutside(typed, 5100, undefined, ohms)).toEqual({
      text: '5.1\u00a0k',
      value: 5100,
      given: undefined,
    })
    expect(followOutside(typed, null, undefined, ohms).text).toBe('')
  })

  it('shows a text that was given from outside, and the value again once there is none', () => {
    const typed = { text: 'abc', value: 4700, given: undefined }
    const given = followOutside(typed, 4700, '5k', ohms)
    expect(given.text).toBe('5k')
    expect(followOutside(given, 4700, undefined, ohms).text).toBe('4.7\u00a0k')
  })
})

describe('reading the text of a value field', () => {
  it('tells empty, value, refusal and formula apart', () => {
    expect(readText('  ', volts)).toEqual({ kind: 'empty' })
    expect(readText('22m', volts)).toMatchObject({ kind: 'value', value: 0.022, readAs: '22\u00a0mV' })
    expect(readText('=1+1', volts)).toEqual({ kind: 'formula' })
    expect(readText('abc', volts)).toMatchObject({ kind: 'refused', choices: [] })
  })

  it('puts the question of the decimal sign, and no other, as one that holds for all fields', () => {
    const sign = readText('4.096', volts)
    const unit = readText('5 A', volts)
    expect(sign.kind === 'refused' && asksDecimalSign(sign.choices)).toBe(true)
    expect(unit.kind === 'refused' && unit.choices.length > 0 && asksDecimalSign(unit.choices)).toBe(false)
    expect(readText('4.096', { ...volts, decimalSign: '.' })).toMatchObject({ kind: 'value', value: 4.096 })
  })

  it('never asks about a text that the program wrote for the value', () => {
    const { text, value } = startText(4.096, undefined, volts)
    expect(readShown(text, value, volts)).toMatchObject({ kind: 'value', value: 4.096 })
    const followed = followOutside({ text: '5', value: 5, given: undefined }, 4.096, undefined, volts)
    expect(readShown(followed.text, followed.value, volts)).toMatchObject({ kind: 'value', value: 4.096 })
    expect(readShown('4.096', 5, volts)).toMatchObject({ kind: 'refused' })
    expect(readShown('4,096', 4.096, volts)).toMatchObject({ kind: 'refused' })
  })

  it('names the unit behind the field', () => {
    expect(unitSuffix('V')).toBe('V')
    expect(unitSuffix('1/K')).toBe('per K')
    expect(unitSuffix('V/V')).toBe('')
    expect(unitSuffix('', 'percent')).toBe('%')
  })
})
