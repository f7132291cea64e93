import { join } from 'node:path'
import { ensureDeps, root } from './setup.mjs'

ensureDeps()
const { createServer } = await import('vite')
const vite = await createServer({ configFile: join(root, 'vite.config.ts') })
await vite.listen()
vite.printUrls()
