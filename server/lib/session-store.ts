import { createHash } from 'node:crypto'
import Database from 'better-sqlite3'
import { type SessionData, Store } from 'express-session'
import { prepareDatabase } from '#server/data-source.ts'
import type { Clock } from './clock.ts'

const minute = 60_000

/** A session ends after this long without a request … */
export const idleLimit = 12 * 60 * minute
/** … and after this long in any case. */
export const absoluteLimit = 7 * 24 * 60 * minute
const touchInterval = minute

interface Row {
  data: string
  created: number
  seen: number
}

type Answer = (error?: unknown) => void

const keyOf = (id: string): string => createHash('sha256').update(id).digest('hex')

/**
 * Sessions in a SQLite file of their own, so that neither another request's rollback nor its lock can reach them. Only
 * the hash of an id is kept. A session that ended stays as a tombstone until its time is over: a request that was
 * under way at sign-out and saves afterwards cannot bring it back.
 */
export class SessionStore extends Store {
  readonly #database: Database.Database
  readonly #clock: Clock
  #swept = 0

  constructor(file: string, clock: Clock) {
    super()
    this.#clock = clock
    this.#database = new Database(file)
    this.#database.pragma('journal_mode = WAL')
    prepareDatabase(this.#database)
    this.#database.exec(`
      CREATE TABLE IF NOT EXISTS sessions (
        key TEXT PRIMARY KEY, userId TEXT, data TEXT NOT NULL, created INTEGER NOT NULL, seen INTEGER NOT NULL,
        dead INTEGER NOT NULL DEFAULT 0
      ) STRICT;
      CREATE INDEX IF NOT EXISTS sessions_by_user ON sessions (userId);
    `)
  }

  override get(id: string, answer: (error: unknown, session?: SessionData | null) => void): void {
    this.#run(answer, () => {
      const now = this.#clock()
      const row = this.#database
        .prepare(
          'SELECT data, created, seen FROM sessions WHERE key = ? AND dead = 0 AND seen > ? AND created > ?',
        )
        .get(keyOf(id), now - idleLimit, now - absoluteLimit) as Row | undefined
      answer(null, row ? (JSON.parse(row.data) as SessionData) : null)
    })
  }

  override set(id: string, session: SessionData, answer?: Answer): void {
    this.#run(answer, () => {
      const now = this.#clock()
      this.#sweep(now)
      const user = session.passport?.user ?? null
      this.#database
        .prepare(
          `INSERT INTO sessions (key, userId, data, created, seen) VALUES (?, ?, ?, ?, ?)
           ON CONFLICT (key) DO UPDATE SET userId = excluded.userId, data = excluded.data, seen = excluded.seen
           WHERE dead = 0`,
        )
        .run(keyOf(id), user, JSON.stringify(session), now, now)
      answer?.()
    })
  }

  override touch(id: string, _session: SessionData, answer?: Answer): void {
    this.#run(answer, () => {
      const now = this.#clock()
      this.#database
        .prepare('UPDATE sessions SET seen = ? WHERE key = ? AND dead = 0 AND seen < ?')
        .run(now, keyOf(id), now - touchInterval)
      answer?.()
    })
  }

  override destroy(id: string, answer?: Answer): void {
    this.#run(answer, () => {
      this.#database
        .prepare(`UPDATE sessions SET userId = NULL, data = '{}', dead = 1 WHERE key = ?`)
        .run(keyOf(id))
      answer?.()
    })
  }

  /** Ends every session of a person. */
  endAllOf(userId: string): void {
    this.#database
      .prepare(`UPDATE sessions SET userId = NULL, data = '{}', dead = 1 WHERE userId = ?`)
      .run(userId)
  }

  /** Sessions that are still alive. */
  count(): number {
    const row = this.#database.prepare('SELECT count(*) AS count FROM sessions WHERE dead = 0').get()
    return (row as { count: number }).count
  }

  check(): void {
    this.#database.prepare('SELECT 1').get()
  }

  close(): void {
    this.#database.close()
  }

  #sweep(now: number): void {
    if (now - this.#swept < 60 * minute) return
    this.#swept = now
    this.#database
      .prepare('DELETE FROM sessions WHERE created < ? OR seen < ?')
      .run(now - absoluteLimit, now - idleLimit)
  }

  /** A store that fails must refuse: its error goes on to the request. */
  #run(answer: Answer | undefined, work: () => void): void {
    try {
      work()
    } catch (error) {
      if (answer) answer(error)
      else throw error
    }
  }
}
