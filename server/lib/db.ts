import { AsyncLocalStorage } from 'node:async_hooks'
import type { DataSource, EntityManager } from 'typeorm'
import { AppError } from '#shared/errors.ts'
import { createDataSource } from '#server/data-source.ts'

const longestQueue = 500

/**
 * The only door to the database. SQLite has one connection here, and two overlapping transactions on it join into
 * one: what one of them acknowledged vanishes when the other rolls back. So writes stand in one queue, each a
 * transaction of its own, and reads use a second, read-only connection that sees committed rows only.
 *
 * Nothing slow (network, PDF, planning) belongs inside `write`: everybody else waits for it.
 */
export class Db {
  readonly #writer: DataSource
  readonly #reader: DataSource
  readonly #inside = new AsyncLocalStorage<EntityManager>()
  #tail: Promise<unknown> = Promise.resolve()
  #waiting = 0
  #isClosing = false

  private constructor(writer: DataSource, reader: DataSource) {
    this.#writer = writer
    this.#reader = reader
  }

  /** Opens the file, brings its schema up to date and checks it. Throws where any of it fails. */
  static async open(file: string): Promise<Db> {
    const writer = createDataSource(file, 'write')
    await writer.initialize()
    try {
      await migrate(writer)
      const reader = createDataSource(file, 'read')
      await reader.initialize()
      return new Db(writer, reader)
    } catch (error) {
      await writer.destroy()
      throw error
    }
  }

  /** For reading. Writing through it is an error. */
  get read(): EntityManager {
    return this.#reader.manager
  }

  /** Runs `work` alone, in one transaction: all of it holds or nothing. Called inside itself it joins. */
  async write<T>(work: (manager: EntityManager) => Promise<T>): Promise<T> {
    const outer = this.#inside.getStore()
    if (outer) return work(outer)
    if (this.#isClosing || this.#waiting >= longestQueue)
      throw new AppError('busy', 'The server is busy. Nothing was changed; try again in a few seconds.', {
        retryAfter: 5,
      })
    this.#waiting += 1
    const turn = this.#tail.then(() =>
      this.#writer.transaction((manager) => this.#inside.run(manager, () => work(manager))),
    )
    this.#tail = turn.catch(() => undefined)
    try {
      return await turn
    } finally {
      this.#waiting -= 1
    }
  }

  /** Throws where the database does not answer. */
  async check(): Promise<void> {
    await this.#reader.query('SELECT 1')
  }

  /** Lets the queue run out, then closes both connections. */
  async close(): Promise<void> {
    this.#isClosing = true
    await this.#tail
    await this.#reader.destroy()
    await this.#writer.destroy()
  }
}

/** All pending migrations hold or none; foreign keys are off while they run, so they are checked after. */
async function migrate(writer: DataSource): Promise<void> {
  await writer.runMigrations({ transaction: 'all' })
  const broken = (await writer.query('PRAGMA foreign_key_check')) as unknown[]
  if (broken.length > 0)
    throw new Error(`After the migration ${broken.length} rows point to rows that are gone.`)
  await writer.query('PRAGMA foreign_keys = ON')
}
