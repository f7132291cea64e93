import { readFileSync } from 'node:fs'
import { join } from 'node:path'
import { planDesign } from '#shared/design/plan-design.ts'
import { milliseconds } from './rows.ts'

// Prints how long the first plan of this process took, ms.
const file = join(import.meta.dirname, '../../docs/examples/flow-velocity.json')
const document: unknown = JSON.parse(readFileSync(file, 'utf8'))
console.log(milliseconds(() => planDesign(document)))
