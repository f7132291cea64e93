import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { User } from '#server/entities/user.ts'
import { absoluteLimit, idleLimit } from '#server/lib/session-store.ts'
import { addMember, buildMember, buildUser, buildWorkspace, password, signIn } from './support/builders.ts'
import { openTestServer, type TestServer } from './support/test-server.ts'

let server: TestServer
let now = Date.parse('2026-03-01T08:00:00Z')

beforeAll(async () => {
  server = await openTestServer({ clock: () => now })
})
afterAll(() => server.close())

const newcomer = (name: string) => ({
  name,
  email: `${name}@new.example`,
  password: 'seven herons at dawn',
  workspaceName: 'Reedbank Surveys',
})

const cookieOf = (response: { headers: Record<string, unknown> }): string =>
  String((response.headers['set-cookie'] as string[] | undefined)?.[0] ?? '').split(';')[0] ?? ''

describe('the current session', () => {
  it('answers a visitor with no user and leaves no trace of the visit', async () => {
    const before = server.store.count()
    const { body, headers } = await server.browser().get('/api/session').expect(200)
    expect(body).toEqual({ user: null, workspaces: [], demo: false, signUpOpen: true })
    expect(headers['set-cookie']).toBeUndefined()
    expect(server.store.count()).toBe(before)
  })

  it('lists the workspaces of a member with the roles held there', async () => {
    const workspaceId = await buildWorkspace(server, 'Upper Weir')
    const { browser, email } = await buildMember(server, workspaceId, ['reviewer', 'engineer'])
    const { body } = await browser.get('/api/session').expect(200)
    expect(body.user).toMatchObject({ email })
    expect(body.workspaces).toEqual([
      { id: workspaceId, name: 'Upper Weir', prefix: 'UW', roles: ['reviewer', 'engineer'] },
    ])
    expect(JSON.stringify(body)).not.toContain('argon2')
  })
})

describe('signing up', () => {
  it('makes an account and a workspace of which the newcomer is owner and engineer', async () => {
    const browser = server.browser()
    const { body } = await browser.post('/api/accounts').send(newcomer('ines')).expect(201)
    expect(body.user).toMatchObject({ name: 'ines', email: 'ines@new.example' })
    expect(body.workspaces).toMatchObject([
      { name: 'Reedbank Surveys', prefix: 'RS', roles: ['owner', 'engineer'] },
    ])
    const again = await browser.get('/api/session').expect(200)
    expect(again.body).toEqual(body)
  })

  it('stores an argon2id hash with a salt of its own', async () => {
    await server.browser().post('/api/accounts').send(newcomer('one')).expect(201)
    await server.browser().post('/api/accounts').send(newcomer('two')).expect(201)
    const users = await server.db.read.findBy(User, [
      { email: 'one@new.example' },
      { email: 'two@new.example' },
    ])
    expect(users.map((user) => user.passwordHash.split('$').slice(0, 4))).toEqual([
      ['', 'argon2id', 'v=19', 'm=19456,t=2,p=1'],
      ['', 'argon2id', 'v=19', 'm=19456,t=2,p=1'],
    ])
    expect(users[0]?.passwordHash).not.toBe(users[1]?.passwordHash)
  })

  it('refuses an address that has an account, however it is written', async () => {
    await server.browser().post('/api/accounts').send(newcomer('twice')).expect(201)
    const { body } = await server
      .browser()
      .post('/api/accounts')
      .send({ ...newcomer('twice'), email: ' TWICE@New.example ' })
      .expect(409)
    expect(body.error.code).toBe('email_taken')
    expect(body.error.fields.email).toContain('Sign in instead')
  })

  it.each([
    ['a short password', { password: 'nine char' }, 'password'],
    ['a password that is guessed first', { password: 'Password2026!' }, 'password'],
    ['a password made of the workspace', { password: 'reedbank-surveys1' }, 'password'],
    ['two addresses in one', { email: 'a@new.example, b@new.example' }, 'email'],
    ['an address with a line break', { email: 'a@new.example\r\nBcc: b@new.example' }, 'email'],
    ['an empty name', { name: '  ' }, 'name'],
    ['a name with a direction mark', { name: 'Ines \u202eMarten' }, 'name'],
    ['a field that is missing', { workspaceName: undefined }, 'workspaceName'],
    ['a field of another kind', { name: { $gt: '' } }, 'name'],
  ])('refuses %s and names the field', async (_, change, field) => {
    const { body } = await server
      .browser()
      .post('/api/accounts')
      .send({ ...newcomer('refused'), ...change })
      .expect(400)
    expect(Object.keys(body.error.fields)).toContain(field)
  })

  it('refuses fields that nobody may set', async () => {
    const { body } = await server
      .browser()
      .post('/api/accounts')
      .send({ ...newcomer('extra'), roles: ['owner'], id: 'chosen-by-me' })
      .expect(400)
    expect(body.error.code).toBe('invalid_input')
    expect(await server.db.read.existsBy(User, { email: 'extra@new.example' })).toBe(false)
  })

  it('is refused where accounts are made by invitation', async () => {
    const closed = await openTestServer({ environment: { SPANDREL_SIGN_UP: 'closed' } })
    const { body } = await closed.browser().post('/api/accounts').send(newcomer('late')).expect(403)
    expect(body.error.message).toContain('invitation')
    await closed.close()
  })
})

describe('signing in', () => {
  it('gives a wrong password and an unknown account the same answer', async () => {
    const { email } = await buildUser(server)
    const send = (address: string) =>
      server
        .browser()
        .post('/api/session')
        .send({ email: address, password: 'not the right one' })
        .expect(401)
    const wrong = await send(email)
    const unknown = await send('nobody@new.example')
    const plain = (body: { error: { requestId?: string } }) => ({ ...body.error, requestId: null })
    expect(plain(wrong.body)).toEqual(plain(unknown.body))
    expect(wrong.headers['set-cookie']).toBeUndefined()
  })

  it('takes about the same time for both', async () => {
    const { email } = await buildUser(server)
    const timed = async (address: string): Promise<number> => {
      const times: number[] = []
      for (let round = 0; round < 15; round += 1) {
        const began = performance.now()
        await server
          .browser()
          .post('/api/session')
          .send({ email: address, password: 'not the right one' })
          .expect(401)
        times.push(performance.now() - began)
      }
      return times.sort((a, b) => a - b)[7] ?? 0
    }
    const known = await timed(email)
    const unknown = await timed('nobody@new.example')
    // Without the hash of nobody the unknown account would answer in a small part of the time.
    expect(unknown / known).toBeGreaterThan(0.5)
    expect(unknown / known).toBeLessThan(2)
  })

  it.each([
    ['an object as password', { email: 'a@new.example', password: { length: 12 } }],
    ['a list as address', { email: ['a@new.example'], password }],
    ['null', { email: null, password: null }],
    ['nothing', {}],
  ])('refuses %s as bad input', async (_, body) => {
    await server.browser().post('/api/session').send(body).expect(400)
  })

  it('refuses credentials in the address, with and without a body', async () => {
    const { email } = await buildUser(server)
    const address = `/api/session?email=${email}&password=${encodeURIComponent(password)}`
    await server.browser().post(address).expect(400)
    const { headers } = await server.browser().post(address).send({ email, password }).expect(400)
    expect(headers['set-cookie']).toBeUndefined()
  })

  it('changes the identifier of the session and ends the one before', async () => {
    const { email } = await buildUser(server)
    const browser = server.browser()
    const first = cookieOf(await browser.post('/api/session').send({ email, password }).expect(200))
    const second = cookieOf(await browser.post('/api/session').send({ email, password }).expect(200))
    expect(first).not.toBe(second)
    const replayed = await server.bare().get('/api/session').set('Cookie', first).expect(200)
    expect(replayed.body.user).toBeNull()
  })

  it('does not adopt an identifier that was planted', async () => {
    const { email } = await buildUser(server)
    const planted = 'spandrel=s%3Aplanted.signature'
    const response = await server
      .browser()
      .post('/api/session')
      .set('Cookie', planted)
      .send({ email, password })
      .expect(200)
    expect(cookieOf(response)).not.toContain('planted')
  })

  it('refuses an account that was closed, and ends its live sessions', async () => {
    const { id, email } = await buildUser(server)
    const browser = await signIn(server, email)
    await server.db.write((manager) =>
      manager.update(User, { id }, { disabledAt: '2026-03-01T00:00:00.000Z' }),
    )
    const { body } = await browser.get('/api/session').expect(200)
    expect(body.user).toBeNull()
    await server.browser().post('/api/session').send({ email, password }).expect(401)
  })

  it('stores a weak hash again with today’s work', async () => {
    const { hash } = await import('@node-rs/argon2')
    const { id, email } = await buildUser(server)
    const weak = await hash(password, { memoryCost: 8192, timeCost: 1, parallelism: 1 })
    await server.db.write((manager) => manager.update(User, { id }, { passwordHash: weak }))
    await signIn(server, email)
    const user = await server.db.read.findOneByOrFail(User, { id })
    expect(user.passwordHash).toContain('$m=19456,t=2,p=1$')
  })

  it('sets a cookie that scripts cannot read and other sites do not send', async () => {
    const { email } = await buildUser(server)
    const { headers } = await server.browser().post('/api/session').send({ email, password }).expect(200)
    expect(String(headers['set-cookie'])).toMatch(
      /^spandrel=.*; Path=\/; Expires=.*; HttpOnly; SameSite=Lax$/,
    )
  })
})

describe('behind https', () => {
  let secure: TestServer
  beforeAll(async () => {
    secure = await openTestServer({
      environment: { PUBLIC_ORIGIN: 'https://plans.example.org', TRUST_PROXY: '1' },
    })
  })
  afterAll(() => secure.close())

  const send = async (protocol: string) => {
    const { email } = await buildUser(secure)
    return secure
      .bare()
      .post('/api/session')
      .set({ Origin: 'https://plans.example.org', 'X-Spandrel': '1', 'X-Forwarded-Proto': protocol })
      .send({ email, password })
  }

  it('binds the cookie to host and https', async () => {
    const { status, headers } = await send('https')
    expect(status).toBe(200)
    expect(String(headers['set-cookie'])).toMatch(
      /^__Host-spandrel=.*; Path=\/; .*HttpOnly; Secure; SameSite=Lax$/,
    )
    expect(String(headers['set-cookie'])).not.toContain('Domain')
  })

  it('says so where somebody signs in over plain http', async () => {
    const { status, body } = await send('http')
    expect(status).toBe(400)
    expect(body.error.message).toContain('https')
  })
})

describe('signing out', () => {
  it('ends the session for good: the cookie is worth nothing afterwards', async () => {
    const workspaceId = await buildWorkspace(server)
    const user = await buildUser(server)
    await addMember(server, workspaceId, user.id, ['engineer'])
    const browser = server.browser()
    const cookie = cookieOf(
      await browser.post('/api/session').send({ email: user.email, password }).expect(200),
    )
    const { headers } = await browser.delete('/api/session').expect(204)
    expect(headers['clear-site-data']).toBe('"cache"')
    await server.bare().get(`/api/workspaces/${workspaceId}/projects`).set('Cookie', cookie).expect(401)
  })

  it('cannot be undone by a request that was under way and saves its session afterwards', async () => {
    const id = 'session-under-way'
    const data = { cookie: { originalMaxAge: 1000 }, passport: { user: 'somebody' } } as never
    server.store.set(id, data)
    server.store.destroy(id)
    server.store.set(id, data)
    server.store.touch(id, data)
    const found = await new Promise((resolve) => server.store.get(id, (_, session) => resolve(session)))
    expect(found).toBeNull()
  })
})

describe('a session', () => {
  const isSignedIn = async (browser: ReturnType<TestServer['browser']>): Promise<boolean> =>
    (await browser.get('/api/session').expect(200)).body.user !== null

  it('ends after the idle limit without a request', async () => {
    const browser = await signIn(server, (await buildUser(server)).email)
    now += idleLimit - 1000
    expect(await isSignedIn(browser)).toBe(true)
    now += idleLimit + 1000
    expect(await isSignedIn(browser)).toBe(false)
  })

  it('ends after the absolute limit, however much it is used', async () => {
    const browser = await signIn(server, (await buildUser(server)).email)
    const step = idleLimit / 2
    for (let passed = 0; passed + step < absoluteLimit; passed += step) {
      now += step
      expect(await isSignedIn(browser)).toBe(true)
    }
    now += step
    expect(await isSignedIn(browser)).toBe(false)
  })

  it('is kept in the file by the hash of its identifier only', async () => {
    const { default: Database } = await import('better-sqlite3')
    const cookie = cookieOf(
      await server
        .browser()
        .post('/api/session')
        .send({ email: (await buildUser(server)).email, password })
        .expect(200),
    )
    const id = decodeURIComponent(cookie).split('s:')[1]?.split('.')[0] ?? ''
    expect(id.length).toBeGreaterThan(20)
    const database = new Database(`${server.folder}/sessions.sqlite`, { readonly: true })
    const rows = JSON.stringify(database.prepare('SELECT * FROM sessions').all())
    database.close()
    expect(rows).not.toContain(id)
  })
})

describe('limits on signing in', () => {
  it('block an account after ten wrong passwords, and say when to try again', async () => {
    const limits = { signIn: 1000, wrongPasswords: 10, signUp: 5, plan: 5, note: 5 }
    const limited = await openTestServer({ limits })
    const { email } = await buildUser(limited)
    const wrong = () => limited.browser().post('/api/session').send({ email, password: 'not the right one' })
    for (let round = 0; round < 10; round += 1) await wrong().expect(401)
    const { body, headers } = await limited
      .browser()
      .post('/api/session')
      .send({ email, password })
      .expect(429)
    expect(body.error.code).toBe('rate_limited')
    expect(Number(headers['retry-after'])).toBeGreaterThan(0)
    const other = await buildUser(limited)
    await signIn(limited, other.email)
    await limited.close()
  })

  it('are not escaped by a forged forwarding address', async () => {
    const limited = await openTestServer({
      limits: { signIn: 3, wrongPasswords: 99, signUp: 5, plan: 5, note: 5 },
    })
    const answers: number[] = []
    for (let round = 0; round < 6; round += 1) {
      const { status } = await limited
        .browser()
        .post('/api/session')
        .set('X-Forwarded-For', `10.0.0.${round}`)
        .send({ email: `somebody${round}@new.example`, password })
      answers.push(status)
    }
    expect(answers).toEqual([401, 401, 401, 429, 429, 429])
    await limited.close()
  })
})
