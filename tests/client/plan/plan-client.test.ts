import { describe, expect, it } from 'vitest'
import { createPlanClient, PlanRefused, type PlanPort } from '#client/lib/plan-client.ts'
import type { PlanAnswer, PlanRequest } from '#client/lib/plan-messages.ts'
import type { Plan } from '#shared/design/plan.ts'

/** A worker that answers when told to. */
function openPorts() {
  const opened: { port: PlanPort; asked: PlanRequest[]; closed: boolean }[] = []
  const client = createPlanClient(() => {
    const entry = { asked: [] as PlanRequest[], closed: false } as (typeof opened)[number]
    entry.port = {
      onmessage: null,
      onerror: null,
      postMessage: (message) => entry.asked.push(message),
      terminate: () => (entry.closed = true),
    }
    opened.push(entry)
    return entry.port
  })
  const answer = (data: PlanAnswer) => opened.at(-1)?.port.onmessage?.({ data } as MessageEvent<PlanAnswer>)
  const fail = (message: string) => opened.at(-1)?.port.onerror?.({ message } as ErrorEvent)
  return { client, opened, answer, fail }
}

const planNamed = (designHash: string) => ({ designHash }) as Plan

describe('the plan client', () => {
  it('gives back the plan of the document that was asked about', async () => {
    const { client, opened, answer } = openPorts()
    const first = client.plan({ name: 'a' })
    const second = client.plan({ name: 'b' })
    expect(opened[0]?.asked).toHaveLength(1)
    answer({ id: 1, ok: true, plan: planNamed('a') })
    answer({ id: 2, ok: true, plan: planNamed('b') })
    expect((await first).designHash).toBe('a')
    expect((await second).designHash).toBe('b')
  })

  it('never sends a question that was aborted while it waited', async () => {
    const { client, opened, answer } = openPorts()
    const first = client.plan({ name: 'a' })
    const stop = new AbortController()
    const stale = client.plan({ name: 'ab' }, { signal: stop.signal })
    stop.abort()
    const last = client.plan({ name: 'abc' })
    await expect(stale).rejects.toMatchObject({ name: 'AbortError' })
    answer({ id: 1, ok: true, plan: planNamed('a') })
    await first
    expect(opened[0]?.asked.map((request) => request.document)).toEqual([{ name: 'a' }, { name: 'abc' }])
    answer({ id: 3, ok: true, plan: planNamed('abc') })
    expect((await last).designHash).toBe('abc')
  })

  it('drops the answer to a question that was aborted while it was worked on', async () => {
    const { client, answer } = openPorts()
    const stop = new AbortController()
    const stale = client.plan({ name: 'a' }, { signal: stop.signal })
    const last = client.plan({ name: 'ab' })
    stop.abort()
    await expect(stale).rejects.toMatchObject({ name: 'AbortError' })
    answer({ id: 1, ok: true, plan: planNamed('a') })
    answer({ id: 2, ok: true, plan: planNamed('ab') })
    expect((await last).designHash).toBe('ab')
  })

  it('names the faults of a document that is not a design', async () => {
    const { client, answer } = openPorts()
    const asked = client.plan({})
    const faults = [{ path: 'rails.positive', reason: 'is missing', accepted: 'a number, in V' }]
    answer({ id: 1, ok: false, faults })
    await expect(asked).rejects.toBeInstanceOf(PlanRefused)
    await expect(asked).rejects.toMatchObject({ faults })
  })

  it('opens a new worker after one that failed, and goes on', async () => {
    const { client, opened, answer, fail } = openPorts()
    const first = client.plan({ name: 'a' })
    const second = client.plan({ name: 'b' })
    fail('out of memory')
    await expect(first).rejects.toThrow('out of memory')
    expect(opened).toHaveLength(2)
    expect(opened[0]?.closed).toBe(true)
    answer({ id: 2, ok: true, plan: planNamed('b') })
    expect((await second).designHash).toBe('b')
  })
})
