import { mkdirSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { brotliCompressSync, gzipSync } from 'node:zlib'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { openTestServer, type TestServer } from './support/test-server.ts'

const large = `export const text = '${'spandrel '.repeat(1000)}'\n`

let folder: string
let server: TestServer

beforeAll(async () => {
  folder = mkdtempSync(join(tmpdir(), 'spandrel-packed-'))
  const assets = join(folder, 'assets')
  mkdirSync(assets)
  writeFileSync(join(folder, 'index.html'), '<!doctype html><title>Spandrel</title>')
  writeFileSync(join(assets, 'large-abc.mjs'), large)
  writeFileSync(join(assets, 'large-abc.mjs.br'), brotliCompressSync(large))
  writeFileSync(join(assets, 'large-abc.mjs.gz'), gzipSync(large))
  writeFileSync(join(assets, 'check-worker-abc.js'), 'export const a = 1\n')
  server = await openTestServer({ pagesFolder: folder })
})
afterAll(async () => {
  await server.close()
  rmSync(folder, { recursive: true, force: true })
})

const get = (accepts: string) =>
  server
    .bare()
    .get('/assets/large-abc.mjs')
    .set('Accept-Encoding', accepts)
    .buffer(true)
    .parse((response, done) => {
      let size = 0
      response.on('data', (part: Buffer) => (size += part.length))
      response.on('end', () => done(null, size))
    })

describe('the largest files', () => {
  it.each([
    ['br', 'gzip, br'],
    ['gzip', 'gzip'],
  ])('are sent as the build packed them: %s', async (encoding, accepts) => {
    const { headers } = await get(accepts).expect(200)
    expect(headers['content-encoding']).toBe(encoding)
    expect(headers['content-type']).toContain('javascript')
    expect(headers['cache-control']).toContain('immutable')
    expect(headers.vary).toContain('Accept-Encoding')
    expect(headers['x-unpacked-length']).toBe(String(large.length))
    const packed = encoding === 'br' ? brotliCompressSync(large) : gzipSync(large)
    expect(headers['content-length']).toBe(String(packed.length))
  })

  it('are sent as they are to whoever unpacks nothing', async () => {
    const { headers, body } = await get('identity').expect(200)
    expect(headers['content-encoding']).toBeUndefined()
    expect(body).toBe(large.length)
  })
})

describe('the worker of the simulator', () => {
  it('may compile WebAssembly; nothing else may', async () => {
    const policyOf = async (path: string) =>
      String((await server.bare().get(path).expect(200)).headers['content-security-policy'])
    const own = await policyOf('/assets/check-worker-abc.js')
    expect(own).toContain("default-src 'none'")
    expect(own).toContain("script-src 'self' 'wasm-unsafe-eval'")
    expect(own).toContain("connect-src 'self' data:")
    expect(own).not.toContain("'unsafe-eval'")
    for (const path of ['/', '/assets/large-abc.mjs', '/api/session'])
      expect(await policyOf(path)).not.toContain('wasm')
  })
})
