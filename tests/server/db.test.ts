import { mkdtempSync, rmSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import Database from 'better-sqlite3'
import { afterEach, beforeEach, describe, expect, it } from 'vitest'
import { createDataSource } from '#server/data-source.ts'
import { Workspace } from '#server/entities/workspace.ts'
import { Db } from '#server/lib/db.ts'

let folder: string
let file: string
let db: Db

beforeEach(async () => {
  folder = mkdtempSync(join(tmpdir(), 'spandrel-db-'))
  file = join(folder, 'spandrel.sqlite')
  db = await Db.open(file)
})
afterEach(async () => {
  await db.close()
  rmSync(folder, { recursive: true, force: true })
})

const workspace = (id: string) => ({ id, name: id, prefix: 'W', createdAt: '2026-01-01T00:00:00.000Z' })
const pause = () => new Promise((resolve) => setTimeout(resolve, Math.random() * 3))

describe('writing', () => {
  it('keeps every change that was acknowledged and none that failed, with hundreds under way at once', async () => {
    await db.write((manager) => manager.insert(Workspace, { ...workspace('counter'), name: '0' }))
    const attempts = Array.from({ length: 400 }, (_, index) => index)
    const results = await Promise.allSettled(
      attempts.map((index) =>
        db.write(async (manager) => {
          await manager.insert(Workspace, workspace(`w${index}`))
          const counter = await manager.findOneByOrFail(Workspace, { id: 'counter' })
          await pause()
          await manager.update(Workspace, { id: 'counter' }, { name: String(Number(counter.name) + 1) })
          if (index % 7 === 3) throw new Error('in the middle')
        }),
      ),
    )
    const acknowledged = attempts.filter((index) => results[index]?.status === 'fulfilled')
    const rows = await db.read.find(Workspace)
    const stored = rows.map(({ id }) => id).filter((id) => id !== 'counter')
    expect(attempts.length - acknowledged.length).toBe(attempts.filter((index) => index % 7 === 3).length)
    expect(stored.toSorted()).toEqual(acknowledged.map((index) => `w${index}`).toSorted())
    expect(rows.find(({ id }) => id === 'counter')?.name).toBe(String(acknowledged.length))
  })

  it('shows nobody a row before it is committed', async () => {
    let seenInside = -1
    await db.write(async (manager) => {
      await manager.insert(Workspace, workspace('new'))
      seenInside = await db.read.count(Workspace)
    })
    expect(seenInside).toBe(0)
    expect(await db.read.count(Workspace)).toBe(1)
  })

  it('joins the change that it is called in', async () => {
    const failing = db.write(async (manager) => {
      await manager.insert(Workspace, workspace('outer'))
      await db.write((inner) => inner.insert(Workspace, workspace('inner')))
      throw new Error('all of it')
    })
    await expect(failing).rejects.toThrow('all of it')
    expect(await db.read.count(Workspace)).toBe(0)
  })

  it('is not possible on the reading side', async () => {
    await expect(db.read.insert(Workspace, workspace('sneaked'))).rejects.toThrow(/readonly/)
  })

  it('tells the next one to come back when hundreds wait already', async () => {
    let release = (): void => undefined
    const gate = new Promise<void>((resolve) => {
      release = resolve
    })
    const waiting = Array.from({ length: 500 }, () => db.write(() => gate))
    await expect(db.write(() => Promise.resolve())).rejects.toMatchObject({ code: 'busy', retryAfter: 5 })
    release()
    await Promise.all(waiting)
    await expect(db.write(() => Promise.resolve('again'))).resolves.toBe('again')
  })

  it('refuses a row that points to nothing', async () => {
    const { Project } = await import('#server/entities/project.ts')
    const orphan = { id: 'p', workspaceId: 'gone', name: 'P', board: '', description: '', version: 1 }
    const times = { createdAt: '', updatedAt: '', deletedAt: null }
    await expect(db.write((m) => m.insert(Project, { ...orphan, ...times }))).rejects.toThrow(/FOREIGN KEY/)
  })

  it('waits for what is under way before it closes', async () => {
    const other = await Db.open(join(folder, 'other.sqlite'))
    const writing = other.write(async (manager) => {
      await pause()
      await manager.insert(Workspace, workspace('late'))
    })
    await other.close()
    await expect(writing).resolves.toBeUndefined()
  })
})

describe('a connection', () => {
  it.each(['write', 'read'] as const)('for %s is set for safety, not for speed', async (mode) => {
    const source = createDataSource(file, mode)
    await source.initialize()
    const settings: unknown = await source.query(`
      SELECT journal_mode, synchronous, foreign_keys, recursive_triggers, trusted_schema, timeout
      FROM pragma_journal_mode, pragma_synchronous, pragma_foreign_keys, pragma_recursive_triggers,
        pragma_trusted_schema, pragma_busy_timeout
    `)
    expect(settings).toEqual([
      {
        journal_mode: 'wal',
        synchronous: 2,
        foreign_keys: 1,
        recursive_triggers: 1,
        trusted_schema: 0,
        timeout: 5000,
      },
    ])
    await source.destroy()
  })
})

describe('the migrations', () => {
  it('make the schema that the entities describe, with nothing left over', async () => {
    const source = createDataSource(file, 'write')
    await source.initialize()
    const drift = await source.driver.createSchemaBuilder().log()
    expect(drift.upQueries.map(({ query }) => query)).toEqual([])
    await source.destroy()
  })

  it('go down to nothing and up again', async () => {
    const source = createDataSource(join(folder, 'down.sqlite'), 'write')
    await source.initialize()
    await source.runMigrations()
    for (const _ of source.migrations) await source.undoLastMigration()
    const tables = (await source.query(
      `SELECT name FROM sqlite_master WHERE type = 'table' AND name NOT IN ('migrations', 'sqlite_sequence')`,
    )) as unknown[]
    expect(tables).toEqual([])
    await source.runMigrations()
    await source.destroy()
  })

  it('run once: an opened database opens again and keeps its rows', async () => {
    await db.write((manager) => manager.insert(Workspace, workspace('kept')))
    await db.close()
    db = await Db.open(file)
    expect(await db.read.count(Workspace)).toBe(1)
  })

  it('refuse a file whose rows point to nothing', async () => {
    const broken = join(folder, 'broken.sqlite')
    await (await Db.open(broken)).close()
    const database = new Database(broken)
    database.pragma('foreign_keys = OFF')
    database.prepare(`INSERT INTO memberships VALUES ('gone', 'gone', '[]', '')`).run()
    database.close()
    await expect(Db.open(broken)).rejects.toThrow(/point to rows that are gone/)
  })

  it('refuse a file that is no database', async () => {
    const { writeFileSync } = await import('node:fs')
    writeFileSync(
      join(folder, 'text.sqlite'),
      'this is text, and long enough to be read as a header of SQLite'.repeat(40),
    )
    await expect(Db.open(join(folder, 'text.sqlite'))).rejects.toThrow(/not a database/)
  })
})
