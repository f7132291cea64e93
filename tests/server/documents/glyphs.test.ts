import { readFileSync } from 'node:fs'
import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { fontFiles } from '#server/documents/fonts.ts'
import { findUnprintable, isHeld, REPLACEMENT, toPrintable } from '#server/documents/glyphs.ts'
import { readCmap } from './read-cmap.ts'

const faces = fontFiles.map((file) => readCmap(readFileSync(file)))

describe('glyph guard', () => {
  it('lets through only what every face of the note holds', () => {
    for (let code = 0; code <= 0x1ffff; code += 1)
      if (isHeld(code)) for (const face of faces) expect(face.has(code), `U+${code.toString(16)}`).toBe(true)
  })

  it('holds the signs that quantities are written with', () => {
    const signs = 'ΩμµΔσπ°±×·−–≤≥≈≠√∞²³½‰…“”‘’€§\u00a0\ufffd'
    expect(findUnprintable(signs)).toEqual([])
    expect(toPrintable(signs)).toBe(signs)
  })

  it('writes signs that the font lacks in other words', () => {
    expect(toPrintable('R1 ∥ R2')).toBe('R1 || R2')
    expect(toPrintable('12\u202f000\u2009Ω')).toBe('12\u00a0000\u00a0Ω')
    expect(toPrintable('1 \u2126')).toBe('1 Ω')
    expect(toPrintable('a\nb\tc')).toBe('a b c')
    expect(toPrintable('in → out')).toBe('in to out')
  })

  it('composes letters and their accents before it looks', () => {
    expect(toPrintable('Mu\u0308hle')).toBe('Mühle')
  })

  it('prints anything else as the replacement character and can name it', () => {
    expect(toPrintable('水位 😀')).toBe(`${REPLACEMENT}${REPLACEMENT} ${REPLACEMENT}`)
    expect(findUnprintable({ title: '水位', rows: [['😀', '水']] })).toEqual(['水', '位', '😀'])
  })

  it('leaves nothing behind that a face would print as another character', () => {
    fc.assert(
      fc.property(fc.string({ unit: 'binary' }), (text) => {
        for (const character of toPrintable(text))
          for (const face of faces) if (!face.has(character.codePointAt(0) ?? 0)) return false
        return true
      }),
    )
  })
})
