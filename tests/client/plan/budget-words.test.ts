import { describe, expect, it } from 'vitest'
import { firstExample } from '#client/features/plan/examples.ts'
import { dominantOf, totalText } from '#client/features/plan/steps/errors/budget-words.ts'
import { answerSteps } from '#client/features/plan/words/step-answers.ts'
import { withPower } from '#client/lib/powers.ts'
import type { Budget } from '#shared/design/plan.ts'

const plain = (text: string | null) => text?.replaceAll('\u00a0', ' ')

const budgetOf = (lines: { label: string; share: number }[]) => ({ lines }) as unknown as Budget

describe('words about the budget', () => {
  it('name every line that is as large as the largest', () => {
    const lines = [
      { label: 'Rf over temperature', share: 0.37 },
      { label: 'Offset', share: 0.26 },
      { label: 'Rg over temperature', share: 0.369 },
    ]
    expect(plain(dominantOf(budgetOf(lines)))).toBe(
      'Rf and Rg over temperature make 37 % of the variance each.',
    )
    expect(plain(dominantOf(budgetOf(lines.slice(0, 2))))).toBe(
      'Rf over temperature makes 37 % of the variance.',
    )
  })

  it('give totals three digits and never less than they are', () => {
    expect(plain(totalText(0.0140012, 'V'))).toBe('14.1 mV')
    expect(plain(totalText(-0.003, 'V'))).toBe('3.00 mV')
  })
})

describe('a tiny figure', () => {
  it.each([
    ['0.000\u00a0000\u00a0049\u00a01\u00a0dB', '4.91e−8\u00a0dB'],
    ['−0.0002', '−2e−4'],
    ['0.0123\u00a0LSB', '0.0123\u00a0LSB'],
    ['0', '0'],
    ['R1 over temperature', 'R1 over temperature'],
  ])('%s is written %s', (text, shown) => expect(withPower(text)).toBe(shown))
})

describe('a step with a caution', () => {
  it('is not ticked', () => {
    const caution = {
      key: 'k',
      severity: 'caution',
      title: 't',
      text: '',
      path: null,
      step: 'sensor',
    } as const
    const answers = answerSteps({
      document: firstExample,
      findings: [caution],
      candidate: null,
      awaited: false,
    })
    expect(answers[1]).toMatchObject({ id: 'sensor', state: 'noted' })
    expect(answers[1]?.text).toMatch(/^1 to note: /)
    expect(answers[0]?.state).toBe('done')
  })
})
