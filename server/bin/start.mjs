import { ensureBuild, ensureDeps } from './setup.mjs'

ensureDeps()
ensureBuild('client')
ensureBuild('server')
await import('../../dist/server/index.js')
