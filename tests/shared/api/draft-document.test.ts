import { describe, expect, it } from 'vitest'
import { draftDocumentSchema } from '#shared/api/draft-document.ts'
import { readDesign } from '#shared/design/read.ts'
import { voltage } from '#shared/sensors/kinds/voltage.ts'

const whole = {
  format: 'spandrel-design/1',
  name: 'Flow',
  sensor: voltage.example,
  converter: { input: { low: 0, high: 2.5 }, bits: 12 },
  rails: { positive: 5 },
}

/** Every way to take one key out of a document, at any depth. */
function* withoutOneKey(value: object): Generator<{ path: string; value: object }> {
  for (const [key, inner] of Object.entries(value) as [string, unknown][]) {
    const { [key]: _, ...rest } = value as Record<string, unknown>
    yield { path: key, value: rest }
    if (typeof inner === 'object' && inner !== null && !Array.isArray(inner))
      for (const deeper of withoutOneKey(inner))
        yield { path: `${key}.${deeper.path}`, value: { ...value, [key]: deeper.value } }
  }
}

describe('a draft', () => {
  it('may be a whole design, and comes out as it went in', () => {
    expect(readDesign(whole).ok).toBe(true)
    expect(draftDocumentSchema.parse(whole)).toEqual(whole)
  })

  it('may lack any key but its format and name', () => {
    const refused = [...withoutOneKey(whole)].filter(
      ({ value }) => !draftDocumentSchema.safeParse(value).success,
    )
    expect(refused.map(({ path }) => path)).toEqual(['format', 'name'])
  })

  it('says what is accepted in the words of the design', () => {
    const { error } = draftDocumentSchema.safeParse({ ...whole, converter: { ...whole.converter, bits: 99 } })
    expect(error?.issues[0]?.path).toEqual(['converter', 'bits'])
    expect(error?.issues[0]?.message).toMatch(/accepted: a whole number from 4 up to 32/)
  })

  it('refuses another kind of value where one is missing beside it', () => {
    const { error } = draftDocumentSchema.safeParse({
      format: whole.format,
      name: 'x',
      rails: { positive: null },
    })
    expect(error?.issues.map((issue) => issue.path.join('.'))).toEqual(['rails.positive'])
  })

  it('keeps free notes, within measure', () => {
    expect(draftDocumentSchema.safeParse({ ...whole, notes: { why: { really: ['yes'] } } }).success).toBe(
      true,
    )
    expect(draftDocumentSchema.safeParse({ ...whole, notes: { why: 'x'.repeat(10_001) } }).success).toBe(
      false,
    )
  })
})
