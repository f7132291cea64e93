import { readdirSync, readFileSync } from 'node:fs'
import { join } from 'node:path'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import type { CheckProgress, CheckRequest } from '#client/lib/check-client.ts'
import type { JobMessage } from '#client/lib/one-job.ts'
import type { IndependentCheck } from '#shared/design/plan.ts'
import type { DesignDocument } from '#shared/design/schema.ts'
import { startApp, type TestApp } from './support/app.ts'

const root = join(import.meta.dirname, '../..')
const document = JSON.parse(
  readFileSync(join(root, 'docs/examples/stilling-well-level.json'), 'utf8'),
) as DesignDocument

type CheckAnswer = JobMessage<CheckProgress, IndependentCheck>

/** The built worker's address: what the page starts when somebody asks for the check. */
function workerAddress(): string {
  const name = readdirSync(join(root, 'dist/client/assets')).find((file) => file.startsWith('check-worker-'))
  if (name === undefined) throw new Error('The build has no check worker')
  return `/assets/${name}`
}

let app: TestApp

beforeAll(async () => {
  app = await startApp()
}, 60_000)

afterAll(() => app.close())

describe('the independent check in the page', () => {
  it('loads the simulator only when asked, shows how far it is, and agrees with the plan', async () => {
    const { page, complaints, close } = await app.open()
    const fetched: string[] = []
    page.on('request', (request) => fetched.push(request.url()))
    await page.goto('/')
    await page.getByRole('table').first().waitFor()
    expect(fetched.filter((url) => /check-worker|eecircuit/.test(url))).toEqual([])

    const answers = await page.evaluate(
      ({ address, request }) =>
        new Promise<CheckAnswer[]>((resolve, reject) => {
          const answers: CheckAnswer[] = []
          const worker = new Worker(address, { type: 'module' })
          worker.onerror = (event) => reject(new Error(event.message || 'The worker failed'))
          worker.onmessage = ({ data }: MessageEvent<CheckAnswer>) => {
            answers.push(data)
            if (data.kind === 'progress') return
            worker.terminate()
            resolve(answers)
          }
          worker.postMessage(request)
        }),
      { address: workerAddress(), request: { document, candidate: 0 } satisfies CheckRequest },
    )

    const last = answers.at(-1)
    expect(last?.kind === 'failed' ? last.message : last?.kind).toBe('done')
    if (last?.kind !== 'done') return
    expect(last.result.lines.filter((line) => !line.ok)).toEqual([])
    expect(last.result.lines.length).toBeGreaterThanOrEqual(10)
    const progress = answers.flatMap((answer) => (answer.kind === 'progress' ? [answer.progress] : []))
    const loading = progress.filter((step) => step.stage === 'loading')
    expect(loading.length).toBeGreaterThan(5)
    expect(loading[0]?.of).toBe(loading.at(-1)?.done)
    const running = progress.filter((step) => step.stage === 'running')
    expect(running.at(-1)?.done).toBe(running.at(-1)?.of)
    expect(complaints).toEqual([])
    await close()
  })

  it('stands in the review: asked for by hand, it says that all figures agree and shows each', async () => {
    const { page, complaints, close } = await app.open()
    await page.goto('/plan/review')
    const panel = page.getByRole('region', { name: 'Independent check' })
    await panel.getByRole('button', { name: 'Check in the simulator' }).click()
    await panel.getByText(/All \d+ figures agree/).waitFor({ timeout: 40_000 })
    const table = panel.getByRole('table')
    expect(await table.getByRole('row').count()).toBeGreaterThan(10)
    for (const what of ['Operating point, low end', 'Gain at', 'Noise of resistors and amplifiers'])
      expect(await table.getByText(what).count()).toBeGreaterThan(0)
    expect(complaints).toEqual([])
    await close()
  })

  it('can be stopped while it runs, and asked for again', async () => {
    const { page, close } = await app.open()
    await page.goto('/plan/review')
    const panel = page.getByRole('region', { name: 'Independent check' })
    await panel.getByRole('button', { name: 'Check in the simulator' }).click()
    await panel.getByRole('button', { name: 'Stop' }).click()
    await panel.getByRole('button', { name: 'Check in the simulator' }).waitFor()
    // The browser tells of a worker's end a moment after it.
    const workers = () => page.workers().filter((worker) => worker.url().includes('check-worker')).length
    await expect.poll(workers, { timeout: 20_000 }).toBe(0)
    await close()
  })

  it('is allowed WebAssembly in its worker, and the page is not', async () => {
    const { page, close } = await app.open()
    await page.goto('/')
    const refused = await page.evaluate(async () => {
      try {
        await WebAssembly.compile(Uint8Array.of(0, 97, 115, 109, 1, 0, 0, 0))
        return false
      } catch {
        return true
      }
    })
    expect(refused).toBe(true)
    const policy = async (address: string) =>
      (await page.request.get(address)).headers()['content-security-policy'] ?? ''
    expect(await policy('/')).not.toContain('wasm')
    expect(await policy(workerAddress())).toContain("'wasm-unsafe-eval'")
    await close()
  })

  it('is sent packed: less than 3 MB for the simulator', async () => {
    const name = readdirSync(join(root, 'dist/client/assets')).find((file) =>
      /^eecircuit-engine-.*\.mjs$/.test(file),
    )
    const { page, close } = await app.open()
    const answer = await page.request.get(`/assets/${name}`, { headers: { 'Accept-Encoding': 'br' } })
    expect(answer.status()).toBe(200)
    expect(answer.headers()['content-encoding']).toBe('br')
    expect(Number(answer.headers()['content-length'])).toBeLessThan(3e6)
    expect(answer.headers()['content-type']).toContain('javascript')
    await close()
  })
})
