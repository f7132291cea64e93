import { describe, expect, it } from 'vitest'
import { firstExample, emptyDocument } from '#client/features/plan/examples.ts'
import { createPlanSession } from '#client/features/plan/session/plan-session.ts'
import type { Plan } from '#shared/design/plan.ts'

/** A planner that answers when told to. */
function begin() {
  const asked: {
    document: unknown
    signal: AbortSignal
    answer: (plan: Plan) => void
    fail: (error: Error) => void
  }[] = []
  const session = createPlanSession(
    { ...firstExample },
    {},
    (document, { signal }) =>
      new Promise((answer, fail) => {
        asked.push({ document, signal, answer, fail })
      }),
  )
  const planNamed = async (index: number, designHash: string) => {
    asked[index]?.answer({ designHash } as Plan)
    await Promise.resolve()
    await Promise.resolve()
  }
  const type = (path: string, value: unknown) =>
    session.draft.dispatch({ type: 'type', path, value, text: String(value), label: path })
  return { session, asked, planNamed, type, planning: () => session.planning.get() }
}

describe('planning a draft', () => {
  it('aborts the question before and never shows its answer', async () => {
    const { asked, planNamed, type, planning } = begin()
    type('converter.bits', 12)
    expect(asked).toHaveLength(2)
    expect(asked[0]?.signal.aborted).toBe(true)
    await planNamed(1, 'new')
    await planNamed(0, 'old')
    expect(planning().planned?.plan.designHash).toBe('new')
    expect(planning().planned?.document.converter.bits).toBe(12)
  })

  it('keeps the last good plan while a value is out of its range, and names the field', async () => {
    const { planNamed, type, planning } = begin()
    await planNamed(0, 'good')
    type('converter.bits', 99)
    expect(planning()).toMatchObject({ status: 'refused', planned: { plan: { designHash: 'good' } } })
    expect(planning().faults.map(({ path }) => path)).toEqual(['converter.bits'])
  })

  it('shows no figures of another design', async () => {
    const { session, planNamed, planning } = begin()
    await planNamed(0, 'good')
    session.draft.dispatch({ type: 'replace', document: emptyDocument, label: 'Start empty' })
    expect(planning()).toMatchObject({ status: 'refused', planned: null })
  })

  it('says that the calculation failed and asks again on request', async () => {
    const { session, asked, planning } = begin()
    asked[0]?.fail(new Error('out of memory'))
    await new Promise((resolve) => setTimeout(resolve, 0))
    expect(planning()).toMatchObject({ status: 'failed', message: 'out of memory' })
    session.retry()
    expect(asked).toHaveLength(2)
    expect(planning().status).toBe('computing')
  })

  it('asks nothing again when only typed text changed', () => {
    const { session, asked } = begin()
    session.draft.dispatch({
      type: 'misread',
      path: 'converter.bits',
      text: 'x',
      reason: 'no',
      label: 'bits',
    })
    expect(asked).toHaveLength(1)
  })
})
