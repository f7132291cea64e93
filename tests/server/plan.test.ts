import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import type { Fault, Plan } from '#shared/design/plan.ts'
import { planDesign } from '#shared/design/plan-design.ts'
import { buildDesign } from './support/builders.ts'
import { openTestServer, type TestServer } from './support/test-server.ts'

let server: TestServer
beforeAll(async () => {
  server = await openTestServer()
})
afterAll(() => server.close())

describe('POST /api/plan', () => {
  it('needs no account and answers the plan that the engine makes, to the last digit', async () => {
    const { body } = await server.bare().post('/api/plan').send(buildDesign()).expect(200)
    expect(body).toEqual(JSON.parse(JSON.stringify(planDesign(buildDesign()))))
    expect((body as Plan).chosen).not.toBeNull()
    expect(server.store.count()).toBe(0)
  })

  it('adds the independent check where it is asked for, and refuses another wish', async () => {
    const { body } = await server.bare().post('/api/plan?check=true').send(buildDesign()).expect(200)
    const plan = body as Plan
    const { check, ...chosen } = plan.candidates[plan.chosen ?? -1] ?? {}
    expect(check?.ok).toBe(true)
    expect(check?.lines.some((line) => line.what.startsWith('Noise'))).toBe(true)
    const own = planDesign(buildDesign())
    expect(chosen).toEqual(JSON.parse(JSON.stringify(own.candidates[own.chosen ?? -1])))
    await server.bare().post('/api/plan?check=yes').send(buildDesign()).expect(400)
    await server.bare().post('/api/plan?check=true').send({}).expect(422)
  })

  it.each([
    ['a missing span', { ...buildDesign(), sensor: undefined }, 'sensor'],
    [
      'a span without width',
      { ...buildDesign(), converter: { input: { low: 1, high: 1 }, bits: 12 } },
      'converter',
    ],
    ['an unknown key', { ...buildDesign(), rails: { positive: 5, colour: 'red' } }, 'rails.colour'],
    ['a newer format', { ...buildDesign(), format: 'spandrel-design/2' }, 'format'],
    ['reversed rails', { ...buildDesign(), rails: { positive: -5, negative: 5 } }, 'rails.positive'],
    ['an empty object', {}, 'format'],
  ])('refuses %s with path, reason and what is accepted', async (_, design, path) => {
    const { body } = await server.bare().post('/api/plan').send(design).expect(422)
    expect(body.error.code).toBe('design_refused')
    const faults = body.faults as Fault[]
    expect(faults.length).toBeGreaterThan(0)
    expect(faults[0]?.path.startsWith(path)).toBe(true)
    for (const fault of faults) {
      expect(fault.reason.length).toBeGreaterThan(3)
      expect(fault.accepted.length).toBeGreaterThan(0)
    }
  })

  it.each([
    ['a list', '[]', 400],
    ['a number', '5', 400],
    ['broken JSON', '{"format":', 400],
    ['text alone', '"design"', 400],
    ['more than 256 kB', JSON.stringify({ notes: { text: 'x'.repeat(300_000) } }), 413],
  ])('answers %s as a bad request', async (_, text, status) => {
    await server.bare().post('/api/plan').set('Content-Type', 'application/json').send(text).expect(status)
  })

  it('takes JSON only', async () => {
    const text = JSON.stringify(buildDesign())
    const { body } = await server
      .bare()
      .post('/api/plan')
      .set('Content-Type', 'text/plain')
      .send(text)
      .expect(415)
    expect(body.error.code).toBe('unsupported_type')
  })

  it('is limited, and says when to try again', async () => {
    const limits = { signIn: 5, wrongPasswords: 5, signUp: 5, plan: 2, note: 5 }
    const limited = await openTestServer({ limits })
    const send = () => limited.bare().post('/api/plan').send({})
    await send().expect(422)
    await send().expect(422)
    const { headers } = await send().expect(429)
    expect(Number(headers['retry-after'])).toBeGreaterThan(0)
    await limited.close()
  })

  it('leaves the server free to answer others while it computes', async () => {
    let isDone = false
    const planning = server
      .bare()
      .post('/api/plan')
      .send(buildDesign('Slow'))
      .then(({ status }) => {
        isDone = true
        return status
      })
    let answered = 0
    let slowest = 0
    while (!isDone) {
      const began = performance.now()
      await server.bare().get('/healthz').expect(200)
      slowest = Math.max(slowest, performance.now() - began)
      answered += 1
    }
    expect(await planning).toBe(200)
    expect(answered).toBeGreaterThan(3)
    expect(slowest).toBeLessThan(500)
  })
})
