import { existsSync, mkdtempSync, rmSync, statSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { afterEach, beforeEach, describe, expect, it } from 'vitest'
import { ConfigError, type Environment, readConfig } from '#server/config.ts'

let folder: string
beforeEach(() => {
  folder = mkdtempSync(join(tmpdir(), 'spandrel-config-'))
})
afterEach(() => rmSync(folder, { recursive: true, force: true }))

const secret = 'k3J8-wQx2_pL9vTz5RbN7mYc4HdF6sGa'
const production = (change: Environment = {}): Environment => ({
  NODE_ENV: 'production',
  PUBLIC_ORIGIN: 'https://plans.example.org',
  SESSION_SECRET: secret,
  SPANDREL_DATA: folder,
  ...change,
})

function problemsOf(environment: Environment): string[] {
  try {
    readConfig(environment)
    return []
  } catch (error) {
    if (error instanceof ConfigError) return error.problems
    throw error
  }
}

describe('the configuration', () => {
  it('needs nothing outside production', () => {
    const config = readConfig({ SPANDREL_DATA: folder })
    expect(config).toMatchObject({
      host: '127.0.0.1',
      port: 4310,
      isDemo: true,
      isSecure: false,
      mode: 'development',
    })
    expect(Buffer.byteLength(config.sessionSecret)).toBeGreaterThanOrEqual(32)
  })

  it('keeps the secret that it made, for its owner alone', () => {
    const first = readConfig({ SPANDREL_DATA: folder }).sessionSecret
    expect(readConfig({ SPANDREL_DATA: folder }).sessionSecret).toBe(first)
    expect(statSync(join(folder, 'session-secret')).mode & 0o777).toBe(0o600)
  })

  it('is complete in production, where nothing is generated and no demonstration runs', () => {
    const config = readConfig(production())
    expect(config).toMatchObject({ isSecure: true, isDemo: false, sessionSecret: secret })
    expect(existsSync(join(folder, 'session-secret'))).toBe(false)
  })

  it('takes an empty variable for an absent one', () => {
    expect(readConfig({ SPANDREL_DATA: folder, PORT: '', HOST: '' })).toMatchObject({
      port: 4310,
      host: '127.0.0.1',
    })
  })

  it.each([
    ['PORT', '80a'],
    ['PORT', '70000'],
    ['PORT', '-1'],
    ['PORT', '0x10'],
    ['HOST', 'a host'],
    ['NODE_ENV', 'staging'],
    ['PUBLIC_ORIGIN', 'weir.example'],
    ['PUBLIC_ORIGIN', 'https://plans.example.org/app'],
    ['TRUST_PROXY', 'true'],
    ['SPANDREL_DEMO', 'yes'],
    ['SPANDREL_SIGN_UP', 'maybe'],
    ['LOG_LEVEL', 'loud'],
    ['SESSION_SECRET', 'abcdefghijkl'],
    ['SESSION_SECRET', 'a'.repeat(64)],
  ])('names %s when it is %s, and never prints the value', (name, value) => {
    const problems = problemsOf({ SPANDREL_DATA: folder, [name]: value })
    expect(problems).toHaveLength(1)
    expect(problems[0]?.startsWith(`${name}: expected `)).toBe(true)
    expect(problems[0]).not.toContain(value)
  })

  it('names every variable that is wrong, not only the first', () => {
    expect(problemsOf({ SPANDREL_DATA: folder, PORT: 'x', HOST: 'a b' })).toHaveLength(2)
  })

  it.each([
    ['SESSION_SECRET', { SESSION_SECRET: undefined }],
    ['PUBLIC_ORIGIN', { PUBLIC_ORIGIN: undefined }],
    ['PUBLIC_ORIGIN', { PUBLIC_ORIGIN: 'http://plans.example.org' }],
    ['SPANDREL_DEMO', { SPANDREL_DEMO: 'on' }],
  ])('refuses to start production over %s', (name, change) => {
    expect(problemsOf(production(change)).map((problem) => problem.split(':')[0])).toEqual([name])
  })

  it('says so where the data folder cannot be made', () => {
    writeFileSync(join(folder, 'file'), '')
    const problems = problemsOf({ SPANDREL_DATA: join(folder, 'file/inside') })
    expect(problems[0]).toContain('SPANDREL_DATA')
  })
})
