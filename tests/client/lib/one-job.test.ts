import { describe, expect, it } from 'vitest'
import { runJob, type JobMessage, type JobPort } from '#client/lib/one-job.ts'
import { PlanRefused } from '#client/lib/plan-client.ts'

class Port implements JobPort<string, number, string> {
  onmessage: JobPort<string, number, string>['onmessage'] = null
  onerror: JobPort<string, number, string>['onerror'] = null
  asked: string[] = []
  isEnded = false
  postMessage(message: string) {
    this.asked.push(message)
  }
  terminate() {
    this.isEnded = true
  }
  say(data: JobMessage<number, string>) {
    this.onmessage?.({ data } as MessageEvent<JobMessage<number, string>>)
  }
}

describe('a worker with one job', () => {
  it('is asked once, tells how far it is, and ends with its answer', async () => {
    const port = new Port()
    const told: number[] = []
    const answer = runJob(() => port, 'x', { onProgress: (n) => told.push(n) })
    port.say({ kind: 'progress', progress: 1 })
    port.say({ kind: 'progress', progress: 2 })
    expect(port.isEnded).toBe(false)
    port.say({ kind: 'done', result: 'y' })
    expect(await answer).toBe('y')
    expect(port.asked).toEqual(['x'])
    expect(told).toEqual([1, 2])
    expect(port.isEnded).toBe(true)
  })

  it('is ended when it is stopped, since it cannot hear that it should stop', async () => {
    const port = new Port()
    const stop = new AbortController()
    const answer = runJob(() => port, 'x', { signal: stop.signal })
    stop.abort()
    await expect(answer).rejects.toMatchObject({ name: 'AbortError' })
    expect(port.isEnded).toBe(true)
  })

  it('is never started where it was stopped before', async () => {
    let opened = 0
    const stop = new AbortController()
    stop.abort()
    const open = () => {
      opened += 1
      return new Port()
    }
    await expect(runJob(open, 'x', { signal: stop.signal })).rejects.toMatchObject({ name: 'AbortError' })
    expect(opened).toBe(0)
  })

  it('hands on faults of the document and failures of the worker', async () => {
    const refused = new Port()
    const first = runJob(() => refused, 'x')
    refused.say({ kind: 'refused', faults: [{ path: 'a', reason: 'b', accepted: 'c' }] })
    await expect(first).rejects.toBeInstanceOf(PlanRefused)
    const failed = new Port()
    const second = runJob(() => failed, 'x')
    failed.onerror?.({ message: 'out of memory' } as ErrorEvent)
    await expect(second).rejects.toThrow('out of memory')
    expect(failed.isEnded).toBe(true)
  })
})
