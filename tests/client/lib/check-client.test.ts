import { describe, expect, it } from 'vitest'
import { type CheckProgress, type CheckRequest, runCheck } from '#client/lib/check-client.ts'
import type { JobMessage, JobPort } from '#client/lib/one-job.ts'
import { PlanRefused } from '#client/lib/plan-client.ts'
import type { IndependentCheck } from '#shared/design/plan.ts'

type Message = JobMessage<CheckProgress, IndependentCheck>

/** A worker that a test answers for. */
class Port implements JobPort<CheckRequest, CheckProgress, IndependentCheck> {
  onmessage: ((event: MessageEvent<Message>) => void) | null = null
  onerror: ((event: ErrorEvent) => void) | null = null
  asked: CheckRequest[] = []
  isEnded = false
  postMessage(message: CheckRequest) {
    this.asked.push(message)
  }
  terminate() {
    this.isEnded = true
  }
  say(data: Message) {
    this.onmessage?.({ data } as MessageEvent<Message>)
  }
}

const check: IndependentCheck = { simulator: 'a simulator', lines: [], ok: true }

describe('a check in the page', () => {
  it('asks one worker once, tells how far it is, and ends the worker with the answer', async () => {
    const port = new Port()
    const told: unknown[] = []
    const wanted = runCheck({ name: 'x' }, 2, { onProgress: (step) => told.push(step) }, () => port)
    expect(port.asked).toEqual([{ document: { name: 'x' }, candidate: 2 }])
    port.say({ kind: 'progress', progress: { stage: 'loading', done: 5, of: null } })
    port.say({ kind: 'progress', progress: { stage: 'running', done: 1, of: 6 } })
    expect(port.isEnded).toBe(false)
    port.say({ kind: 'done', result: check })
    expect(await wanted).toEqual(check)
    expect(told).toEqual([
      { stage: 'loading', done: 5, of: null },
      { stage: 'running', done: 1, of: 6 },
    ])
    expect(port.isEnded).toBe(true)
  })

  it('ends the worker at once where the person stops it', async () => {
    const port = new Port()
    const stop = new AbortController()
    const wanted = runCheck({}, 0, { signal: stop.signal }, () => port)
    stop.abort()
    await expect(wanted).rejects.toMatchObject({ name: 'AbortError' })
    expect(port.isEnded).toBe(true)
  })

  it('starts nothing where it was stopped before', async () => {
    let opened = 0
    const wanted = runCheck({}, 0, { signal: AbortSignal.abort() }, () => {
      opened += 1
      return new Port()
    })
    await expect(wanted).rejects.toMatchObject({ name: 'AbortError' })
    expect(opened).toBe(0)
  })

  it('passes on faults of the design and failures, and ends the worker', async () => {
    const refused = new Port()
    const first = runCheck({}, 0, {}, () => refused)
    refused.say({ kind: 'refused', faults: [{ path: 'rails', reason: 'missing', accepted: 'two rails' }] })
    await expect(first).rejects.toBeInstanceOf(PlanRefused)
    const failed = new Port()
    const second = runCheck({}, 0, {}, () => failed)
    failed.say({ kind: 'failed', message: 'The simulator gave no answer in 20 s' })
    await expect(second).rejects.toThrow('The simulator gave no answer in 20 s')
    const broken = new Port()
    const third = runCheck({}, 0, {}, () => broken)
    broken.onerror?.({ message: '' } as ErrorEvent)
    await expect(third).rejects.toThrow('stopped unexpectedly')
    expect([refused, failed, broken].map((port) => port.isEnded)).toEqual([true, true, true])
  })
})
