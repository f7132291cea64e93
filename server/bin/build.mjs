import { ensureBuild, ensureDeps } from './setup.mjs'

ensureDeps()
ensureBuild('client', { force: true })
ensureBuild('server', { force: true })
