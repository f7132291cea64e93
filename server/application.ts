import { existsSync } from 'node:fs'
import { join } from 'node:path'
import type { Express } from 'express'
import { createApp } from './app.ts'
import { type Config, type Environment, readConfig } from './config.ts'
import { seedDemo } from './demo/seed.ts'
import { systemClock } from './lib/clock.ts'
import { createEngine } from './lib/create-engine.ts'
import { Db } from './lib/db.ts'
import { createLogger, type Logger } from './lib/logger.ts'
import { findRoot } from './lib/root.ts'
import { SessionStore } from './lib/session-store.ts'

export interface Application {
  app: Express
  config: Config
  logger: Logger
  /** From now on `/readyz` says no. */
  announceStop(): void
  /** Waits for writes under way, then closes the databases. */
  close(): Promise<void>
}

/** Opens databases, brings them up to date, fills in the demonstration and builds the application. */
export async function openApplication(environment: Environment): Promise<Application> {
  const config = readConfig(environment)
  const logger = createLogger(config.logLevel, (line) => process.stdout.write(line))
  const db = await Db.open(config.databaseFile)
  const store = new SessionStore(config.sessionFile, systemClock)
  if (config.isDemo) await seedDemo(db, systemClock)
  const engine = createEngine(config.isDemo)
  const folder = join(findRoot(), 'dist/client')
  let isStopping = false
  const app = createApp({
    config,
    db,
    store,
    logger,
    engine,
    clock: systemClock,
    pagesFolder: existsSync(folder) ? folder : null,
    isStopping: () => isStopping,
  })
  return {
    app,
    config,
    logger,
    announceStop() {
      isStopping = true
    },
    async close() {
      await engine.close()
      await db.close()
      store.close()
    },
  }
}
