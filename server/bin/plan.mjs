import { ensureBuild, ensureDeps } from './setup.mjs'

ensureDeps()
ensureBuild('server')
await import('../../dist/server/plan.js')
