import { afterAll, beforeAll, describe, expect, it, vi } from 'vitest'
import { planDesign } from '#shared/design/plan-design.ts'
import type { DesignDocument } from '#shared/design/schema.ts'
import { EnginePool } from '#server/workers/engine-pool.ts'
import { buildDesign } from './support/builders.ts'

let pool: EnginePool
beforeAll(() => {
  pool = new EnginePool()
})
afterAll(() => pool.close())

describe('the engine’s workers', () => {
  it('answer each job with its own plan, more of them than there are workers', async () => {
    const names = ['A', 'B', 'C', 'D']
    const plans = await Promise.all(
      names.map((name) => pool.run({ kind: 'plan', document: buildDesign(name) })),
    )
    expect(plans).toEqual(names.map((name) => planDesign(buildDesign(name))))
  })

  it('pass on a failure and go on working', async () => {
    const broken = { format: 'nothing' } as unknown as DesignDocument
    await expect(pool.run({ kind: 'plan', document: broken })).rejects.toThrow('The engine failed.')
    await expect(pool.run({ kind: 'plan', document: buildDesign() })).resolves.toMatchObject({
      format: 'spandrel-plan/1',
    })
  })

  it('refuse when the queue is full, and say when to come back', async () => {
    const small = new EnginePool({ workers: 1, queue: 1 })
    const first = small.run({ kind: 'plan', document: buildDesign() })
    const second = small.run({ kind: 'plan', document: buildDesign() })
    await expect(small.run({ kind: 'plan', document: buildDesign() })).rejects.toMatchObject({
      code: 'busy',
      retryAfter: 5,
    })
    await Promise.all([first, second])
    await small.close()
  })

  it('give up a job that takes too long, and start the next with a new worker', async () => {
    const hasty = new EnginePool({ workers: 1, timeout: 1 })
    await expect(hasty.run({ kind: 'plan', document: buildDesign() })).rejects.toMatchObject({ code: 'busy' })
    await hasty.close()
    await expect(hasty.run({ kind: 'plan', document: buildDesign() })).rejects.toMatchObject({ code: 'busy' })
  })

  it('end without work after a while, and the next job starts a new one', async () => {
    const brief = new EnginePool({ workers: 1, idle: 20 })
    const first = await brief.run({ kind: 'plan', document: buildDesign() })
    expect(brief.size).toBe(1)
    await vi.waitFor(() => expect(brief.size).toBe(0))
    expect(await brief.run({ kind: 'plan', document: buildDesign() })).toEqual(first)
    await brief.close()
  })

  it('refuse a job that is not theirs', async () => {
    await expect(pool.run({ kind: 'check', document: buildDesign() })).rejects.toThrow('The engine failed.')
  })
})

describe('the worker with the simulator', () => {
  it('checks one design after the other, and answers null where the plan chose nothing', async () => {
    const checks = new EnginePool({ script: 'check-worker', workers: 1 })
    const [one, two, none] = await Promise.all([
      checks.run({ kind: 'check', document: buildDesign('One') }),
      checks.run({ kind: 'check', document: buildDesign('Two') }),
      checks.run({ kind: 'check', document: { ...buildDesign(), rails: { positive: 0.5 } } }),
    ])
    expect(one?.ok).toBe(true)
    expect(two).toEqual(one)
    expect(none).toBeNull()
    await checks.close()
  })
})
