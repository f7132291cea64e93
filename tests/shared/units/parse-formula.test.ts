import { beforeAll, describe, expect, it } from 'vitest'
import { parseFormula } from '#shared/units/parse-formula.ts'

describe('arithmetic after an equals sign', () => {
  // The evaluator is loaded by the first formula; that alone may take seconds on a busy machine.
  beforeAll(() => parseFormula('=1', { unit: '' }), 60_000)

  it.each([
    ['=2*24k9/499R+1', '', (2 * 24900) / 499 + 1],
    ['=5V/10mA', 'Ω', 500],
    ['=1,5*2', 'V', 3],
    ['=10k+4k7', 'Ω', 14700],
    ['= (1 + 2) × 3', '', 9],
    ['=2^10', '', 1024],
    ['=sqrt(16)*R47', 'Ω', 4 * 0.47],
    ['=-3', 'V', -3],
    ['=1e3*2', '', 2000],
    ['=100nF*2', 'F', 2e-7],
    ['=1/(2*pi*10k*16n)', 'Hz', 1 / (2 * Math.PI * 1e4 * 16e-9)],
    ['=2,5\u22121', 'V', 1.5],
  ])('works out %s', async (text, unit, value) => {
    const result = await parseFormula(text, { unit })
    expect(result.ok && Math.abs(result.value / value - 1)).toBeLessThan(1e-14)
  })

  it('takes the result in per cent where the field does', async () => {
    expect(await parseFormula('=1/20', { unit: '', display: 'percent' })).toMatchObject({
      ok: true,
      value: 0.0005,
    })
  })

  it('shows how the result was read', async () => {
    expect(await parseFormula('=2*24k9/499R+1', { unit: '' })).toMatchObject({
      readAs: '100.799\u00a0599\u00a02',
    })
  })

  it.each([
    ['=', 'follows'],
    ['=1/0', 'finite'],
    ['=sqrt(-1)', 'cannot be worked out'],
    ['=(1', 'cannot be worked out'],
    ['=2**3', 'cannot be worked out'],
    ['=2 3', 'sign is missing'],
    ['=2(3)', 'sign is missing'],
    ['=foo(1)', 'not known'],
    ['=import("fs")', 'not known'],
    ['=1,000*2', 'two ways'],
    ['=a.constructor', 'not known'],
    ['=2;3', 'cannot be read'],
    ['=9e14*9e14', 'too large'],
  ])('refuses %s', async (text, reason) => {
    const result = await parseFormula(text, { unit: 'V' })
    expect(result.ok).toBe(false)
    if (!result.ok) expect(result.reason).toContain(reason)
  })
})
