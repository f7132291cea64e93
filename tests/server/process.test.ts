import { type ChildProcessWithoutNullStreams, spawn } from 'node:child_process'
import { mkdtempSync, rmSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { afterEach, beforeEach, describe, expect, it } from 'vitest'

const root = join(import.meta.dirname, '../..')

interface Running {
  child: ChildProcessWithoutNullStreams
  text: () => string
  ended: Promise<number | null>
}

let folder: string
let running: Running[] = []

beforeEach(() => {
  folder = mkdtempSync(join(tmpdir(), 'spandrel-process-'))
})
afterEach(async () => {
  for (const { child, ended } of running) {
    child.kill('SIGKILL')
    await ended
  }
  running = []
  rmSync(folder, { recursive: true, force: true })
})

function start(environment: Record<string, string> = {}): Running {
  const { NODE_ENV: _, ...rest } = process.env
  const env = { ...rest, SPANDREL_DATA: folder, PORT: '0', ...environment }
  const child = spawn(process.execPath, ['--import', 'tsx', join(root, 'server/index.ts')], {
    cwd: root,
    env,
  })
  let text = ''
  child.stdout.on('data', (chunk) => (text += String(chunk)))
  child.stderr.on('data', (chunk) => (text += String(chunk)))
  const ended = new Promise<number | null>((resolve) => child.on('close', resolve))
  const one = { child, text: () => text, ended }
  running.push(one)
  return one
}

async function addressOf(one: Running): Promise<string> {
  await expect.poll(one.text, { timeout: 40_000 }).toMatch(/is ready: http:\/\/127\.0\.0\.1:\d+/)
  return /is ready: (http:\S+)/.exec(one.text())?.[1] ?? ''
}

describe('the server process', () => {
  it('prints its address and the demonstration’s accounts, answers, and ends cleanly on SIGTERM', async () => {
    const one = start()
    const address = await addressOf(one)
    expect(one.text()).toContain('engineer@quellmoor.example')
    expect((await fetch(`${address}/readyz`)).status).toBe(200)
    one.child.kill('SIGTERM')
    expect(await one.ended).toBe(0)
  })

  it('keeps the data over a restart: who was signed in stays signed in', async () => {
    const one = start()
    const address = await addressOf(one)
    const response = await fetch(`${address}/api/session`, {
      method: 'POST',
      headers: { Origin: address, 'X-Spandrel': '1', 'Content-Type': 'application/json' },
      body: JSON.stringify({ email: 'engineer@quellmoor.example', password: 'sluice-gate-and-heron' }),
    })
    const cookie = response.headers.get('set-cookie')?.split(';')[0] ?? ''
    one.child.kill('SIGKILL')
    await one.ended
    const again = await addressOf(start())
    const session = (await (await fetch(`${again}/api/session`, { headers: { Cookie: cookie } })).json()) as {
      user: { email: string } | null
    }
    expect(session.user?.email).toBe('engineer@quellmoor.example')
  })

  it('does not start with a bad variable, and names it', async () => {
    const one = start({ PORT: 'eighty' })
    expect(await one.ended).toBe(1)
    expect(one.text()).toContain('PORT: expected a whole number from 0 to 65535')
    expect(one.text()).not.toContain('eighty')
  })

  it('does not start in production without a secret', async () => {
    const one = start({ NODE_ENV: 'production', PUBLIC_ORIGIN: 'https://plans.example.org' })
    expect(await one.ended).toBe(1)
    expect(one.text()).toContain('SESSION_SECRET')
  })

  it('starts in production with an empty database and no account', async () => {
    const environment = { NODE_ENV: 'production', PUBLIC_ORIGIN: 'https://plans.example.org' }
    const one = start({ ...environment, SESSION_SECRET: 'k3J8-wQx2_pL9vTz5RbN7mYc4HdF6sGa' })
    await expect.poll(one.text, { timeout: 40_000 }).toContain('"event":"listening"')
    expect(one.text()).not.toContain('quellmoor')
    const { default: Database } = await import('better-sqlite3')
    const database = new Database(join(folder, 'spandrel.sqlite'), { readonly: true })
    expect(database.prepare('SELECT count(*) AS count FROM users').get()).toEqual({ count: 0 })
    database.close()
  })

  it('says so where the port is taken', async () => {
    const { port } = new URL(await addressOf(start()))
    const second = start({ PORT: port })
    expect(await second.ended).toBe(1)
    expect(second.text()).toContain('in use already')
  })
})
