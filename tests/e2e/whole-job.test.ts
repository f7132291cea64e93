import { execFileSync } from 'node:child_process'
import { mkdtempSync, readFileSync, rmSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import type { Page } from 'playwright-core'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { planDesign } from '#shared/design/plan-design.ts'
import { startApp, type TestApp, type TestPage } from './support/app.ts'

/** Spaces of any kind and line ends say nothing about a figure. */
const squeeze = (text: string): string => text.replace(/[\s\u00a0]+/g, '')

async function download(page: Page, button: string, folder: string): Promise<string> {
  const [file] = await Promise.all([
    page.waitForEvent('download', { timeout: 60_000 }),
    page.getByRole('button', { name: button, exact: true }).click(),
  ])
  const path = join(folder, file.suggestedFilename())
  await file.saveAs(path)
  return path
}

const figuresOnScreen = async (page: Page): Promise<string[]> =>
  page.locator('[data-testid=answers] dd:not(.small)').allInnerTexts()

describe('the whole job', () => {
  let app: TestApp
  let tab: TestPage
  let folder: string

  beforeAll(async () => {
    app = await startApp()
    tab = await app.open()
    folder = mkdtempSync(join(tmpdir(), 'spandrel-job-'))
  })

  afterAll(async () => {
    await tab?.close()
    await app?.close()
    rmSync(folder, { recursive: true, force: true })
  })

  it('plans −0.35 V to 0.35 V into 0 V to 2.5 V at 14 bits from 5 V, typed as engineers write it', async () => {
    const { page } = tab
    await page.goto('/')
    await page.getByLabel('Sensor output, low').fill('-350m')
    await page.getByLabel('Sensor output, high').fill('0,35 V')
    await page.getByLabel('Source resistance').fill('4k7')
    await page.getByLabel('Converter input, high').fill('2V5')
    await page.getByLabel('Converter bits').fill('14')
    await page.getByLabel('Positive rail').fill('5')
    await page.getByLabel('Positive rail').press('Tab')
    await page.getByText('Read as 4.7 kΩ').waitFor()
    await page.getByText('Non-inverting amplifier, offset up').first().waitFor()
    expect(await figuresOnScreen(page)).toHaveLength(4)
  })

  it('gives the plan of the engine, to the last digit', async () => {
    const { page } = tab
    await page.goto('/plan/review')
    const design: unknown = JSON.parse(readFileSync(await download(page, 'Design, JSON', folder), 'utf8'))
    const plan: unknown = JSON.parse(readFileSync(await download(page, 'Plan, JSON', folder), 'utf8'))
    expect(design).toMatchObject({ sensor: { sourceResistance: 4700, output: { low: -0.35, high: 0.35 } } })
    expect(plan).toEqual(JSON.parse(JSON.stringify(planDesign(design))))
    const asked = await page.request.post('/api/plan', { data: design, headers: { 'X-Spandrel': '1' } })
    expect(await asked.json()).toEqual(plan)
  })

  it('downloads a design note that says the same as the screen', async () => {
    const { page } = tab
    const figures = await figuresOnScreen(page)
    expect(figures).toHaveLength(4)
    const note = await download(page, 'Design note, PDF', folder)
    const text = squeeze(execFileSync('pdftotext', ['-layout', note, '-'], { encoding: 'utf8' }))
    for (const figure of figures) expect(text).toContain(squeeze(figure))
    expect(text).toContain(squeeze('Draft, not for manufacture'))
    for (const value of await page.locator('.chain .codes b').allInnerTexts()) expect(text).toContain(value)
  })

  it('gives a netlist and a parts list', async () => {
    const { page } = tab
    const netlist = readFileSync(await download(page, 'SPICE netlist', folder), 'utf8')
    expect(netlist).toMatch(/^VSENSE sense 0/m)
    expect(netlist.trimEnd()).toMatch(/\.end$/)
    const parts = readFileSync(await download(page, 'Parts, CSV', folder), 'utf8').split('\r\n')
    expect(parts[0]).toBe('Part,Kind,Value,Unit,Tolerance,Name,Sets,Stage,Fixed by hand')
    expect(parts.some((line) => line.startsWith('R1,resistor,'))).toBe(true)
  })

  it('moves the plan into a workspace on joining, with the same figures', async () => {
    const { page } = tab
    const before = await figuresOnScreen(page)
    await page.getByRole('link', { name: 'Keep this plan' }).click()
    await page.getByLabel('Your name').fill('Runa Tideway')
    await page.getByLabel('E-mail address').fill('runa@tideway.example')
    await page.getByLabel('Password').fill('reed-warbler-at-dusk')
    await page.getByLabel('Name of the workspace').fill('Tideway Gauges')
    await page.locator('form button[type=submit]').click()
    await page.waitForURL(/\/w\/[^/]+\/projects\/[^/]+\/channels\/[^/]+\/plan\/measurand/)
    await page.locator('[data-testid=answers]').waitFor()
    expect(await figuresOnScreen(page)).toEqual(before)
    await page.goto(page.url().replace('/measurand', '/sensor'))
    await expect
      .poll(() => page.getByLabel('Source resistance', { exact: true }).inputValue())
      .toMatch(/^4\.7\sk$/)
    await page.goto(page.url().replace('/sensor', '/review'))
    await page.locator('[data-testid=answers]').waitFor()
    const note = await download(page, 'Design note, PDF', folder)
    const text = squeeze(execFileSync('pdftotext', ['-layout', note, '-'], { encoding: 'utf8' }))
    for (const figure of before) expect(text).toContain(squeeze(figure))
    expect(text).toContain(squeeze('Tideway Gauges'))
  })

  it('starts anew on the front page once the plan has moved', async () => {
    const { page } = tab
    await page.goto('/')
    await page.getByText('an example, not changed yet').waitFor()
  })

  it('finds the channel again in the list of its project', async () => {
    const { page } = tab
    await page.getByRole('link', { name: 'Projects' }).click()
    await page.getByRole('link', { name: 'From this browser' }).first().click()
    await page.getByText('Flow velocity').first().waitFor()
  })

  it('wrote nothing about errors to the console', () => {
    expect(tab.complaints).toEqual([])
  })
})
