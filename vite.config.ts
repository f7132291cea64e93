import { readdirSync, readFileSync, statSync, writeFileSync } from 'node:fs'
import { basename, join } from 'node:path'
import { brotliCompressSync, constants, gzipSync } from 'node:zlib'
import tailwindcss from '@tailwindcss/vite'
import react from '@vitejs/plugin-react'
import type { Plugin } from 'vite'
import { defineConfig } from 'vitest/config'

const root = import.meta.dirname
const serverAddresses = /^\/(api\/|healthz$|readyz$)/

/** The built server's files: the application, the command line, and what runs in worker threads of its own. */
function serverEntries(): Record<string, string> {
  const files = readdirSync(join(root, 'server'), { recursive: true, encoding: 'utf8' })
  const workers = files.filter((file) => file.endsWith('-worker.ts'))
  return {
    index: join(root, 'server/index.ts'),
    plan: join(root, 'server/plan-command.ts'),
    ...Object.fromEntries(workers.map((file) => [basename(file, '.ts'), join(root, 'server', file)])),
  }
}

/**
 * In development one process serves pages and API: the server's code is loaded through Vite, and loaded again by the
 * first request after one of its files changed.
 */
function developmentServer(): Plugin {
  type Application = Awaited<ReturnType<typeof import('./server/application.ts').openApplication>>
  return {
    name: 'development-server',
    apply: (_, { command }) => command === 'serve' && !process.env.VITEST,
    configureServer(vite) {
      let loaded: unknown = null
      let application: Promise<Application> | null = null
      const current = async (): Promise<Application> => {
        const module = await vite.ssrLoadModule(join(root, 'server/application.ts'))
        if (module !== loaded || !application) {
          const previous = application
          loaded = module
          application = (async () => {
            await previous?.then((old) => old.close()).catch(() => undefined)
            return (module as typeof import('./server/application.ts')).openApplication(process.env)
          })()
        }
        return application
      }
      vite.middlewares.use((request, response, next) => {
        if (!serverAddresses.test((request.url ?? '').split('?')[0] ?? '')) return next()
        current().then(({ app }) => app(request, response), next)
      })
    },
  }
}

/** Files from this size on, bytes, are packed once at build: the simulator, 20 MB that become 2.3 MB. */
const PACKED_FROM = 2e6

/** Leaves a brotli and a gzip copy beside each large asset; the server sends these. */
function packLargeAssets(): Plugin {
  return {
    name: 'pack-large-assets',
    apply: 'build',
    writeBundle({ dir }) {
      const folder = join(dir ?? '', 'assets')
      for (const name of readdirSync(folder)) {
        const file = join(folder, name)
        const { size } = statSync(file)
        if (size < PACKED_FROM || /\.(br|gz)$/.test(name)) continue
        const bytes = readFileSync(file)
        const params = {
          [constants.BROTLI_PARAM_QUALITY]: 9,
          [constants.BROTLI_PARAM_LGWIN]: 24,
          [constants.BROTLI_PARAM_SIZE_HINT]: size,
        }
        writeFileSync(`${file}.br`, brotliCompressSync(bytes, { params }))
        writeFileSync(`${file}.gz`, gzipSync(bytes))
      }
    },
  }
}

export default defineConfig(({ isSsrBuild }) => ({
  root: join(root, 'client'),
  cacheDir: join(root, 'node_modules/.vite'),
  plugins: isSsrBuild ? [] : [react(), tailwindcss(), developmentServer(), packLargeAssets()],
  worker: { format: 'es' as const },
  build: {
    outDir: join(root, isSsrBuild ? 'dist/server' : 'dist/client'),
    emptyOutDir: true,
    copyPublicDir: !isSsrBuild,
    target: isSsrBuild ? 'node20' : 'es2022',
    sourcemap: Boolean(isSsrBuild),
    reportCompressedSize: false,
    chunkSizeWarningLimit: 1500,
    ...(isSsrBuild ? { ssr: true, rolldownOptions: { input: serverEntries() } } : {}),
  },
  server: { host: '127.0.0.1', port: Number(process.env.PORT ?? 4310), strictPort: true },
  test: {
    reporters: ['default'],
    coverage: { provider: 'v8' as const, reportsDirectory: join(root, 'coverage') },
    projects: [
      {
        extends: true as const,
        root,
        test: {
          name: 'unit',
          include: ['tests/shared/**/*.test.{ts,tsx}', 'tests/client/**/*.test.{ts,tsx}'],
        },
      },
      {
        extends: true as const,
        root,
        test: {
          name: 'server',
          include: ['tests/server/**/*.test.{ts,tsx}'],
          testTimeout: 60_000,
          hookTimeout: 60_000,
        },
      },
      {
        extends: true as const,
        root,
        test: {
          name: 'browser',
          include: ['tests/e2e/**/*.test.ts'],
          testTimeout: 60_000,
          hookTimeout: 60_000,
          fileParallelism: false,
        },
      },
    ],
  },
}))
