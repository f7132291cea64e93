import { mkdtempSync, rmSync } from 'node:fs'
import type { AddressInfo } from 'node:net'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import supertest from 'supertest'
import { requestHeader } from '#shared/api/endpoint.ts'
import { createApp, type Dependencies } from '#server/app.ts'
import { readConfig } from '#server/config.ts'
import { systemClock, type Clock } from '#server/lib/clock.ts'
import { createEngine } from '#server/lib/create-engine.ts'
import { Db } from '#server/lib/db.ts'
import { createLogger } from '#server/lib/logger.ts'
import { SessionStore } from '#server/lib/session-store.ts'

const noLimits = { signIn: 1e6, wrongPasswords: 1e6, signUp: 1e6, plan: 1e6, note: 1e6 }

export interface TestServer {
  db: Db
  store: SessionStore
  folder: string
  origin: string
  /** Lines of the log, one JSON object each. */
  log: string[]
  /** Somebody with a browser of their own: cookies kept, requests marked as the application's own. */
  browser(): Browser
  /** Without cookies and without any header of ours. */
  bare(): ReturnType<typeof supertest>
  close(): Promise<void>
}

export type Browser = ReturnType<typeof supertest.agent>

type Options = Partial<Pick<Dependencies, 'engine' | 'limits' | 'pagesFolder'>> & {
  environment?: Record<string, string>
  clock?: Clock
}

/** The real application on a database of its own, listening on a free port. */
export async function openTestServer(options: Options = {}): Promise<TestServer> {
  const folder = mkdtempSync(join(tmpdir(), 'spandrel-test-'))
  const config = readConfig({
    NODE_ENV: 'test',
    SPANDREL_DATA: folder,
    SPANDREL_DEMO: 'off',
    ...options.environment,
  })
  const clock = options.clock ?? systemClock
  const db = await Db.open(config.databaseFile)
  const store = new SessionStore(config.sessionFile, clock)
  const log: string[] = []
  const engine = options.engine ?? createEngine(false)
  const app = createApp({
    config,
    db,
    store,
    clock,
    engine,
    logger: createLogger('debug', (line) => log.push(line)),
    pagesFolder: options.pagesFolder ?? null,
    limits: options.limits ?? noLimits,
  })
  const server = app.listen(0, '127.0.0.1')
  await new Promise((resolve) => server.once('listening', resolve))
  const origin = `http://127.0.0.1:${(server.address() as AddressInfo).port}`
  return {
    db,
    store,
    folder,
    origin,
    log,
    browser() {
      const agent = supertest.agent(origin)
      return agent.set({
        Origin: origin,
        'Sec-Fetch-Site': 'same-origin',
        [requestHeader.name]: requestHeader.value,
      })
    },
    bare: () => supertest(origin),
    async close() {
      server.closeAllConnections()
      await new Promise((resolve) => server.close(resolve))
      await engine.close()
      await db.close()
      store.close()
      rmSync(folder, { recursive: true, force: true })
    },
  }
}
