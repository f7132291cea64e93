import { describe, expect, it } from 'vitest'
import { toRuns } from '#shared/note/equation-runs.ts'

const marked = (text: string) =>
  toRuns(text)
    .map(({ text: piece, style }) =>
      style === 'symbol' ? `<${piece}>` : style === 'subscript' ? `[${piece}]` : piece,
    )
    .join('')

describe('equations as runs', () => {
  it('makes quantity symbols oblique with upright subscripts', () => {
    expect(marked('G = R2/(R1 + R2) × (1 + Rf/Rg)')).toBe(
      '<G> = <R>[2]/(<R>[1] + <R>[2]) × (1 + <R>[f]/<R>[g])',
    )
    expect(marked('b = −Vref × R2/R1')).toBe('<b> = −<V>[ref] × <R>[2]/<R>[1]')
  })

  it('keeps units upright behind their number', () => {
    expect(marked('b = 2.5\u00a0V × 9.31\u00a0kΩ/(57.6\u00a0kΩ) = 1.29\u00a0V')).toBe(
      '<b> = 2.5\u00a0V × 9.31\u00a0kΩ/(57.6\u00a0kΩ) = 1.29\u00a0V',
    )
  })

  it('never loses or adds a character but the underscore of a subscript', () => {
    for (const text of ['G = 1 + k/Rg', '0', 'b = 0', 'U_ref + 3', '(1+2)·x', ''])
      expect(
        toRuns(text)
          .map((run) => run.text)
          .join(''),
      ).toBe(text.replace('_', ''))
  })
})
