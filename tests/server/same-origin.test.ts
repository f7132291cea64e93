import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { User } from '#server/entities/user.ts'
import { buildDesign, buildUser, password } from './support/builders.ts'
import { openTestServer, type TestServer } from './support/test-server.ts'

let server: TestServer
beforeAll(async () => {
  server = await openTestServer()
})
afterAll(() => server.close())

const own = () => server.origin

describe('a request that changes something', () => {
  const refused: [string, () => Record<string, string>][] = [
    ['a form on another site', () => ({ Origin: 'https://evil.test', 'Sec-Fetch-Site': 'cross-site' })],
    ['another site that knows our header', () => ({ Origin: 'https://evil.test', 'X-Spandrel': '1' })],
    ['a sibling site', () => ({ Origin: own(), 'Sec-Fetch-Site': 'same-site', 'X-Spandrel': '1' })],
    ['an address typed by hand', () => ({ 'Sec-Fetch-Site': 'none', 'X-Spandrel': '1' })],
    ['a sandboxed frame', () => ({ Origin: 'null', 'X-Spandrel': '1' })],
    ['a program that does not say where it comes from', () => ({ 'X-Spandrel': '1' })],
    ['the right origin without our header', () => ({ Origin: own() })],
    ['the right origin with another value in our header', () => ({ Origin: own(), 'X-Spandrel': '0' })],
    ['the right host on another port', () => ({ Origin: `${own()}0`, 'X-Spandrel': '1' })],
    [
      'the right host over another scheme',
      () => ({ Origin: own().replace('http:', 'https:'), 'X-Spandrel': '1' }),
    ],
  ]

  it.each(refused)('is refused from %s', async (_, headers) => {
    const { email } = await buildUser(server)
    const response = await server.bare().post('/api/session').set(headers()).send({ email, password })
    expect(response.status).toBe(403)
    expect(response.body.error.code).toBe('cross_site')
    expect(response.headers['set-cookie']).toBeUndefined()
  })

  const accepted: [string, () => Record<string, string>][] = [
    ['our own page', () => ({ Origin: own(), 'Sec-Fetch-Site': 'same-origin', 'X-Spandrel': '1' })],
    ['our own page in an older browser', () => ({ Origin: own(), 'X-Spandrel': '1' })],
  ]

  it.each(accepted)('is taken from %s', async (_, headers) => {
    const { email } = await buildUser(server)
    await server.bare().post('/api/session').set(headers()).send({ email, password }).expect(200)
  })

  it('is not taken as text, which forms can send', async () => {
    const { email } = await buildUser(server)
    await server
      .browser()
      .post('/api/session')
      .set('Content-Type', 'text/plain')
      .send(JSON.stringify({ email, password }))
      .expect(415)
  })

  it('makes no account when it is refused', async () => {
    const email = 'made-by-evil@new.example'
    const account = { name: 'Evil', email, password: 'seven herons at dawn', workspaceName: 'Evil' }
    await server.bare().post('/api/accounts').set('Origin', 'https://evil.test').send(account).expect(403)
    expect(await server.db.read.existsBy(User, { email })).toBe(false)
  })
})

describe('a request that only computes', () => {
  it('is answered to programs', async () => {
    await server.bare().post('/api/plan').send({}).expect(422)
  })

  it.each([{ 'Sec-Fetch-Site': 'cross-site' }, { Origin: 'https://evil.test' }])(
    'is refused to another site’s page: %o',
    async (headers) => {
      await server.bare().post('/api/plan').set(headers).send(buildDesign()).expect(403)
    },
  )
})

describe('another origin', () => {
  it('is never granted anything', async () => {
    const answered = await server.bare().get('/api/session').set('Origin', 'https://evil.test').expect(200)
    expect(Object.keys(answered.headers).filter((name) => name.startsWith('access-control'))).toEqual([])
    const preflight = await server
      .bare()
      .options('/api/session')
      .set({ Origin: 'https://evil.test', 'Access-Control-Request-Method': 'POST' })
    expect(Object.keys(preflight.headers).filter((name) => name.startsWith('access-control'))).toEqual([])
  })
})
