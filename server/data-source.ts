import 'reflect-metadata'
import type { Database } from 'better-sqlite3'
import { DataSource } from 'typeorm'
import { entities } from './entities/index.ts'
import { migrations } from './migrations/index.ts'

/**
 * SQLite drops to `synchronous = NORMAL` without a word once a file is in WAL mode; FULL must be said on each
 * connection. The other three close holes that triggers and foreign schemas would leave open.
 */
export function prepareDatabase(database: Database): void {
  database.pragma('busy_timeout = 5000')
  database.pragma('synchronous = FULL')
  database.pragma('foreign_keys = ON')
  database.pragma('recursive_triggers = ON')
  database.pragma('trusted_schema = OFF')
}

/** A connection to the database file; `read` cannot change it and expects it to exist. */
export function createDataSource(file: string, mode: 'write' | 'read'): DataSource {
  return new DataSource({
    type: 'better-sqlite3',
    database: file,
    readonly: mode === 'read',
    enableWAL: mode === 'write',
    prepareDatabase: (database: Database) => prepareDatabase(database),
    entities,
    migrations,
    migrationsTransactionMode: 'all',
    synchronize: false,
    logging: false,
  })
}
