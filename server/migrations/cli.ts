import { mkdirSync } from 'node:fs'
import { dirname } from 'node:path'
import { createDataSource } from '#server/data-source.ts'
import { readConfig } from '#server/config.ts'

const { databaseFile } = readConfig(process.env)
mkdirSync(dirname(databaseFile), { recursive: true })

/** What the migration commands of package.json work on. */
export const migrationDataSource = createDataSource(databaseFile, 'write')
