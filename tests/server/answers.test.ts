import { mkdirSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { errorBodySchema } from '#shared/errors.ts'
import { createEngine } from '#server/lib/create-engine.ts'
import { buildMember, buildWorkspace, password } from './support/builders.ts'
import { openTestServer, type TestServer } from './support/test-server.ts'

const secret = 'rails of the inner office'

let folder: string
let server: TestServer

beforeAll(async () => {
  folder = mkdtempSync(join(tmpdir(), 'spandrel-pages-'))
  mkdirSync(join(folder, 'assets'))
  writeFileSync(join(folder, 'index.html'), '<!doctype html><title>Spandrel</title>')
  writeFileSync(join(folder, 'assets/main-abc123.js'), 'export const a = 1\n')
  writeFileSync(join(folder, '.env'), 'SECRET=1')
  const engine = { ...createEngine(false), plan: () => Promise.reject(new Error(secret)) }
  server = await openTestServer({ pagesFolder: folder, engine })
})
afterAll(async () => {
  await server.close()
  rmSync(folder, { recursive: true, force: true })
})

describe('every answer', () => {
  it.each([
    ['a page', '/', 200],
    ['a page of the application', '/w/upper-weir/projects', 200],
    ['a file', '/assets/main-abc123.js', 200],
    ['the API', '/api/session', 200],
    ['an unknown address', '/api/nothing', 404],
    ['the health address', '/healthz', 200],
  ])('carries the security headers: %s', async (_, path, status) => {
    const { headers } = await server.bare().get(path).expect(status)
    const policy = String(headers['content-security-policy'])
    for (const part of [
      "default-src 'none'",
      "script-src 'self'",
      "style-src 'self'",
      "object-src 'none'",
      "base-uri 'none'",
      "frame-ancestors 'none'",
    ])
      expect(policy).toContain(part)
    expect(policy).not.toContain('unsafe')
    expect(headers['strict-transport-security']).toContain('max-age=31536000; includeSubDomains')
    expect(headers['x-content-type-options']).toBe('nosniff')
    expect(headers['cross-origin-opener-policy']).toBe('same-origin')
    expect(headers['cross-origin-resource-policy']).toBe('same-origin')
    expect(headers['referrer-policy']).toBe('same-origin')
    expect(headers['x-powered-by']).toBeUndefined()
    expect(headers['x-request-id']).toMatch(/^[0-9a-f-]{36}$/)
  })

  it('of the API is JSON in UTF-8 that nobody keeps', async () => {
    const { headers } = await server.bare().get('/api/session').expect(200)
    expect(headers['content-type']).toBe('application/json; charset=utf-8')
    expect(headers['cache-control']).toBe('no-store')
  })

  it('to an error has the one shape', async () => {
    const answers = [
      await server.bare().get('/api/nothing').expect(404),
      await server.bare().post('/api/session').send({}).expect(403),
      await server.browser().post('/api/session').send({}).expect(400),
      await server.browser().get('/api/workspaces/upper/projects').expect(401),
    ]
    for (const { body, headers } of answers) {
      expect(errorBodySchema.safeParse(body).success).toBe(true)
      expect(body.error.requestId).toBe(headers['x-request-id'])
    }
  })
})

describe('pages', () => {
  it('are found by the application itself, whatever their address', async () => {
    const { text, headers } = await server.bare().get('/w/a/projects/b/channels/c/plan/stages').expect(200)
    expect(text).toContain('<title>Spandrel</title>')
    expect(headers['cache-control']).toBe('no-cache')
  })

  it('keep their files for good, since a changed file has another name', async () => {
    const { headers } = await server.bare().get('/assets/main-abc123.js').expect(200)
    expect(headers['cache-control']).toContain('immutable')
  })

  it.each([
    '/.env',
    '/.git/HEAD',
    '/package.json',
    '/assets/main-abc123.js.map',
    '/assets/',
    '/..%2f..%2fetc%2fpasswd',
  ])('do not show %s', async (path) => {
    const { status, text } = await server.bare().get(path)
    if (status === 200) expect(text).toContain('<title>Spandrel</title>')
    else expect([400, 403, 404]).toContain(status)
    expect(text).not.toContain('SECRET')
  })
})

describe('an unexpected error', () => {
  it('tells the person a number and the log the rest', async () => {
    const { buildDesign } = await import('./support/builders.ts')
    const { body } = await server.bare().post('/api/plan').send(buildDesign()).expect(500)
    expect(body.error.code).toBe('internal')
    expect(JSON.stringify(body)).not.toContain(secret)
    expect(JSON.stringify(body)).not.toContain('.ts')
    const line = server.log.find(
      (entry) => entry.includes(body.error.requestId) && entry.includes('"failed"'),
    )
    expect(line).toContain(secret)
  })
})

describe('a wrong method', () => {
  it('is told which would be right', async () => {
    const { body } = await server.bare().put('/api/session').send({}).expect(405)
    expect(body.error.message).toContain('GET, POST, DELETE')
    await server.bare().trace('/api/session').expect(405)
  })
})

describe('a request that is too large or broken', () => {
  it.each([
    ['broken JSON', 'application/json', '{"email":', 400],
    ['more than 256 kB', 'application/json', `{"a":"${'x'.repeat(270_000)}"}`, 413],
    ['another type', 'application/xml', '<a/>', 415],
    ['another character set', 'application/json; charset=latin1', '{}', 415],
  ])('is refused: %s', async (_, type, text, status) => {
    await server.browser().post('/api/session').set('Content-Type', type).send(text).expect(status)
  })

  it('is refused also when it only grows large on unpacking', async () => {
    const { gzipSync } = await import('node:zlib')
    const packed = gzipSync(JSON.stringify({ a: 'x'.repeat(5_000_000) }))
    const response = await fetch(`${server.origin}/api/plan`, {
      method: 'POST',
      headers: { 'Content-Type': 'application/json', 'Content-Encoding': 'gzip' },
      body: new Uint8Array(packed),
    })
    expect(response.status).toBe(413)
  })

  it('is refused where a parameter comes twice or as a list', async () => {
    const { body } = await server.bare().post('/api/note?paper=A4&paper=Letter').send({}).expect(400)
    expect(Object.keys(body.error.fields)).toEqual(['paper'])
    await server.bare().post('/api/note?paper[]=A4').send({}).expect(400)
    await server.bare().post('/api/note?colour=red').send({}).expect(400)
  })
})

describe('reading', () => {
  it('changes nothing in the database', async () => {
    const { default: Database } = await import('better-sqlite3')
    const workspaceId = await buildWorkspace(server)
    const { browser } = await buildMember(server, workspaceId, ['owner', 'engineer'])
    const { body: project } = await browser
      .post(`/api/workspaces/${workspaceId}/projects`)
      .send({ name: 'P' })
    const database = new Database(join(server.folder, 'spandrel.sqlite'), { readonly: true })
    const version = () => database.pragma('data_version', { simple: true })
    const before = version()
    await browser.get('/api/session').expect(200)
    await browser.get(`/api/workspaces/${workspaceId}/projects`).expect(200)
    await browser.get(`/api/workspaces/${workspaceId}/projects/${project.id}`).expect(200)
    await browser.get(`/api/workspaces/${workspaceId}/projects/${project.id}/channels`).expect(200)
    expect(version()).toBe(before)
    database.close()
  })
})

describe('the log', () => {
  it('is one JSON object a line, with who, what, when and how long', async () => {
    const workspaceId = await buildWorkspace(server)
    const { id, browser } = await buildMember(server, workspaceId, ['reader'])
    await browser.get(`/api/workspaces/${workspaceId}/projects`).expect(200)
    await expect.poll(() => server.log.some((line) => line.includes(workspaceId))).toBe(true)
    const line = server.log.find((entry) => entry.includes(workspaceId)) ?? ''
    expect(JSON.parse(line)).toMatchObject({
      level: 'info',
      event: 'request',
      method: 'GET',
      route: '/api/workspaces/:workspaceId/projects',
      status: 200,
      userId: id,
      workspaceId,
    })
  })

  it('holds no password, cookie or body, and no line break that somebody sent', async () => {
    const workspaceId = await buildWorkspace(server)
    const { browser } = await buildMember(server, workspaceId, ['engineer'])
    await browser
      .post(`/api/workspaces/${workspaceId}/projects`)
      .set('User-Agent', 'canary-agent')
      .send({ name: 'canary-project' })
      .expect(201)
    await server.bare().get('/api/%0d%0acanary-line%1b[31m').expect(404)
    await server.bare().get('/api/session?token=canary-token').expect(400)
    const all = server.log.join('')
    for (const canary of [password, 'spandrel=s%3A', 'canary-agent', 'canary-project', 'canary-token'])
      expect(all).not.toContain(canary)
    for (const line of all.trimEnd().split('\n')) expect(() => JSON.parse(line) as unknown).not.toThrow()
  })
})

describe('health', () => {
  it('says ready while the database answers', async () => {
    const { body } = await server.bare().get('/readyz').expect(200)
    expect(body).toEqual({ status: 'ready' })
  })

  it('says not ready once a database is gone, and still lives', async () => {
    const failing = await openTestServer()
    failing.store.check = () => {
      throw new Error('gone')
    }
    const { body } = await failing.bare().get('/readyz').expect(503)
    expect(body).toEqual({ status: 'not ready' })
    await failing.bare().get('/healthz').expect(200)
    await failing.close()
  })
})
