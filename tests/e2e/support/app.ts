import { spawn, type ChildProcess } from 'node:child_process'
import { accessSync, constants, mkdtempSync, readFileSync, rmSync } from 'node:fs'
import { createRequire } from 'node:module'
import { tmpdir } from 'node:os'
import { delimiter, join } from 'node:path'
import { chromium, type Browser, type BrowserContext, type Page } from 'playwright-core'
import { expect } from 'vitest'

/** The built application on a data folder of its own, and a browser to drive it with. */
export interface TestApp {
  address: string
  browser: Browser
  /** A page in a fresh context; what goes wrong in its console is collected. */
  open(options?: PageOptions): Promise<TestPage>
  close(): Promise<void>
}

export interface PageOptions {
  width?: number
  height?: number
  theme?: 'light' | 'dark'
}

export interface TestPage {
  page: Page
  context: BrowserContext
  /** Errors and warnings of the console, and exceptions of the page. */
  complaints: string[]
  close(): Promise<void>
}

const root = join(import.meta.dirname, '../../..')

function onPath(name: string): string {
  for (const folder of (process.env.PATH ?? '').split(delimiter)) {
    const file = join(folder, name)
    try {
      accessSync(file, constants.X_OK)
      return file
    } catch {
      // Not in this folder.
    }
  }
  throw new Error(`${name} is not on PATH. Install it: apt-get install ${name}`)
}

/** Starts the server on a free port and resolves with its address once it listens. */
function startServer(folder: string): Promise<{ server: ChildProcess; address: string }> {
  const server = spawn(process.execPath, [join(root, 'dist/server/index.js')], {
    cwd: root,
    env: { ...process.env, NODE_ENV: 'test', PORT: '0', SPANDREL_DATA: folder, SPANDREL_DEMO: 'on' },
    stdio: ['ignore', 'pipe', 'pipe'],
  })
  let said = ''
  return new Promise((resolve, reject) => {
    const late = setTimeout(() => reject(new Error(`The server did not start in 30 s:\n${said}`)), 30_000)
    const listen = (chunk: Buffer) => {
      said += chunk.toString()
      const address = /"address":"(http:[^"]+)"/.exec(said)?.[1]
      if (address === undefined) return
      clearTimeout(late)
      resolve({ server, address })
    }
    server.stdout.on('data', listen)
    server.stderr.on('data', listen)
    server.on('exit', (code) => {
      clearTimeout(late)
      reject(new Error(`The server stopped with ${code}:\n${said}`))
    })
  })
}

export async function startApp(): Promise<TestApp> {
  const folder = mkdtempSync(join(tmpdir(), 'spandrel-e2e-'))
  const { server, address } = await startServer(folder)
  const browser = await chromium.launch({
    executablePath: onPath('chromium'),
    args: ['--no-sandbox', '--disable-dev-shm-usage'],
  })
  return {
    address,
    browser,
    async open({ width = 1440, height = 900, theme = 'light' } = {}) {
      const context = await browser.newContext({
        baseURL: address,
        viewport: { width, height },
        colorScheme: theme,
        acceptDownloads: true,
      })
      const page = await context.newPage()
      const complaints: string[] = []
      page.on('console', (message) => {
        if (message.type() === 'error' || message.type() === 'warning') complaints.push(message.text())
      })
      page.on('pageerror', (error) => complaints.push(error.message))
      return { page, context, complaints, close: () => context.close() }
    },
    async close() {
      await browser.close()
      const ended = new Promise((resolve) => server.once('exit', resolve))
      server.kill('SIGTERM')
      await ended
      rmSync(folder, { recursive: true, force: true })
    },
  }
}

const axeFile = createRequire(import.meta.url).resolve('axe-core/axe.min.js')

interface AxeResult {
  violations: { id: string; nodes: { html: string; failureSummary?: string }[] }[]
}

/** Fails with every violation of WCAG 2.2 A and AA and of the best practices that axe finds on the page. */
export async function expectAccessible(page: Page, what: string): Promise<void> {
  await page.evaluate(readFileSync(axeFile, 'utf8'))
  const found = await page.evaluate(async () => {
    const { axe } = globalThis as unknown as {
      axe: { run(root: Document, options: object): Promise<AxeResult> }
    }
    const { violations } = await axe.run(document, {
      runOnly: ['wcag2a', 'wcag2aa', 'wcag21aa', 'wcag22aa', 'best-practice'],
    })
    return violations.map(({ id, nodes }) => `${id}: ${nodes.map((n) => n.html.slice(0, 160)).join(' | ')}`)
  })
  expect(found, what).toEqual([])
}
