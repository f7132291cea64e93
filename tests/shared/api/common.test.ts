import { describe, expect, it } from 'vitest'
import { idSchema, isCleanText, lineOfText, textBlock } from '#shared/api/common.ts'
import { emailSchema } from '#shared/api/session.ts'

describe('text for people', () => {
  it.each(['Strömung', 'µ Ω ° − × ÷ ² ³ ½ √ ≤', 'モーター', '𝑥 and 🌊', 'a, b; "c" <d> & \'e\''])(
    'may be %s',
    (text) => {
      expect(isCleanText(text)).toBe(true)
      expect(lineOfText('Name', { max: 40 }).parse(text)).toBe(text)
    },
  )

  it.each([
    ['a NUL', 'a\u0000b'],
    ['a bell', 'a\u0007b'],
    ['an escape code', 'a\u001b[31m'],
    ['a line break', 'a\nb'],
    ['a line separator', 'a\u2028b'],
    ['text turned around', 'a\u202eb'],
    ['an isolate', 'a\u2066b'],
    ['half a surrogate pair', 'a\ud800b'],
    ['the other half', 'a\udc00b'],
  ])('may not hold %s', (_, text) => {
    expect(isCleanText(text)).toBe(false)
    expect(lineOfText('Name', { max: 40 }).safeParse(text).success).toBe(false)
  })

  it('may have several lines where a block is asked for', () => {
    expect(textBlock('Notes', { max: 40 }).parse(' a\n\tb ')).toBe('a\n\tb')
    expect(textBlock('Notes', { max: 40 }).safeParse('a\u0000').success).toBe(false)
  })

  it('is trimmed before it is measured', () => {
    expect(lineOfText('Name', { max: 3 }).parse('  abc  ')).toBe('abc')
    expect(lineOfText('Name', { max: 3 }).safeParse('   ').success).toBe(false)
  })

  it('is checked fast, however long and odd', () => {
    const began = performance.now()
    isCleanText('\u202d'.repeat(50_000))
    isCleanText(`${'a '.repeat(25_000)}\u0000`)
    emailSchema.safeParse(`${'a'.repeat(50_000)}@`)
    expect(performance.now() - began).toBeLessThan(200)
  })
})

describe('an identifier', () => {
  it.each(['quellmoor', 'ch-03', '0123456789abcdef'])('may be %s', (id) => {
    expect(idSchema.safeParse(id).success).toBe(true)
  })
  it.each(['', 'a', '-a-', 'A1', 'a b', 'a/b', '../a', 'a'.repeat(41), 'ä1'])('may not be "%s"', (id) => {
    expect(idSchema.safeParse(id).success).toBe(false)
  })
})

describe('an e-mail address', () => {
  it('is one account however it is written', () => {
    expect(emailSchema.parse(' Engineer@Quellmoor.EXAMPLE ')).toBe('engineer@quellmoor.example')
  })
  it.each([
    'a@b.example, c@d.example',
    'Team: a@b.example;',
    'a@b.example\nBcc: c@d.example',
    '<a@b.example>',
    'a@b',
  ])('may not be %o', (text) => {
    expect(emailSchema.safeParse(text).success).toBe(false)
  })
})
