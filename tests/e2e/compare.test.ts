import type { Page } from 'playwright-core'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import type { DesignDocument } from '#shared/design/schema.ts'
import { expectAccessible, startApp, type TestApp } from './support/app.ts'

const kept = (page: Page): Promise<DesignDocument> =>
  page.evaluate(
    () =>
      (JSON.parse(localStorage.getItem('spandrel.visitor') ?? '{}') as { document: DesignDocument }).document,
  )

/** Keeps the example, then edits a tolerance that matters and a name that moves nothing. */
async function edit(page: Page): Promise<void> {
  await page.goto('/plan/parts')
  await page.locator('[data-testid=answers]').waitFor()
  await page.getByRole('button', { name: 'Keep this draft to compare' }).click()
  await page.locator('#field-parts-resistors-tolerance').fill('0.5')
  await expect.poll(async () => (await kept(page)).parts?.resistors?.tolerance).toBe(0.005)
  await page.getByRole('link', { name: 'Compare with the kept variant' }).click()
  await page.waitForURL('**/plan/compare')
  await page.locator('.compare-table').first().waitFor()
}

describe('a draft against its kept variant', () => {
  let app: TestApp

  beforeAll(async () => {
    app = await startApp()
  })
  afterAll(() => app?.close())

  it('shows the edit first, then the answers that it alone moved, joined to it', async () => {
    const { page, complaints, close } = await app.open()
    await edit(page)
    await expect.poll(() => page.title()).toMatch(/^Compare/)
    const rows = page.locator('.compare-table tbody tr')
    expect(await rows.nth(0).innerText()).toBe('1 edit')
    expect((await rows.nth(1).innerText()).replaceAll('\u00a0', ' ')).toMatch(
      /^Resistor tolerance\s+0\.1 %(, as usual)?\s+0\.5 % Take back/,
    )
    const uncertainty = page.locator('[data-link="effect uncertainty.asBuilt"]')
    expect(await uncertainty.innerText()).toMatch(/up by .*: worse/)
    // With a single edit it goes without saying which one moved the answer.
    expect(await uncertainty.innerText()).not.toContain('alone')
    expect(await page.locator('.link-lines path').count()).toBeGreaterThan(1)
    expect(await page.locator('.plan-diagram .d-signed').count()).toBeGreaterThan(2)
    expect(complaints).toEqual([])
    await close()
  })

  it('takes an edit back, and goes back to the kept variant as a whole; undo works for both', async () => {
    const { page, close } = await app.open()
    await edit(page)
    await page.getByRole('button', { name: 'Take back the edit of Resistor tolerance' }).click()
    await page.getByText('The draft is the kept variant: nothing was edited.').waitFor()
    await page.keyboard.press('Control+z')
    await page.getByText('1 edit', { exact: true }).waitFor()
    await page.getByRole('button', { name: 'Go back to the kept variant' }).click()
    await page.getByText('The draft is the kept variant: nothing was edited.').waitFor()
    await page.keyboard.press('Control+z')
    await expect.poll(async () => (await kept(page)).parts?.resistors?.tolerance).toBe(0.005)
    await close()
  })

  it('stays kept over a reload, and is forgotten when asked to', async () => {
    const { page, close } = await app.open()
    await edit(page)
    await page.reload()
    await page.locator('.compare-table').first().waitFor()
    await page.getByRole('button', { name: 'Forget the kept variant' }).click()
    await page.getByText('No variant is kept.').waitFor()
    await page.reload()
    await page.getByText('No variant is kept.').waitFor()
    await close()
  })

  it.each([
    ['light', 1440],
    ['dark', 320],
  ] as const)('has nothing that axe objects to, in %s at %i px', async (theme, width) => {
    const { page, complaints, close } = await app.open({ theme, width })
    await edit(page)
    await expectAccessible(page, `compare, ${theme}, ${width}`)
    expect(
      await page.evaluate(() => document.documentElement.scrollWidth - window.innerWidth),
    ).toBeLessThanOrEqual(0)
    expect(complaints).toEqual([])
    await close()
  })
})

describe('a channel against its kept variant', () => {
  let app: TestApp

  beforeAll(async () => {
    app = await startApp()
  })
  afterAll(() => app?.close())

  it('is compared in the same way, and what is taken back is saved', async () => {
    const { page, complaints, close } = await app.open()
    await page.goto('/plan/parts')
    await page.locator('#field-parts-resistors-tolerance').fill('0.2')
    await page.getByText(/^in this browser/).waitFor()
    await page.goto('/plan/review')
    await page.getByRole('link', { name: 'Keep this plan' }).click()
    await page.getByLabel('Your name').fill('Runa Tideway')
    await page.getByLabel('E-mail address').fill('runa@tideway.example')
    await page.getByLabel('Password').fill('reed-warbler-at-dusk')
    await page.getByLabel('Name of the workspace').fill('Tideway Gauges')
    await page.locator('form button[type=submit]').click()
    await page.waitForURL(/channels\/[^/]+\/plan\/measurand/)
    const address = page.url().replace(/measurand$/, '')
    await page.getByRole('button', { name: 'Keep this draft to compare' }).click()
    await page.goto(`${address}parts`)
    await page.locator('#field-parts-resistors-tolerance').fill('1')
    await page.getByRole('link', { name: 'Compare with the kept variant' }).click()
    await page.waitForURL(/\/plan\/compare$/)
    await page.getByRole('button', { name: 'Take back the edit of Resistor tolerance' }).click()
    await page.getByText('The draft is the kept variant: nothing was edited.').waitFor()
    await page.locator('.title-block dt').getByText('Saved', { exact: true }).waitFor()
    await page.goto(`${address}parts`)
    await expect.poll(() => page.locator('#field-parts-resistors-tolerance').inputValue()).toBe('0.2')
    expect(complaints).toEqual([])
    await close()
  })
})

describe('the independent check in the review', () => {
  let app: TestApp

  beforeAll(async () => {
    app = await startApp()
  })
  afterAll(() => app?.close())

  it('runs when asked for and says that every figure agrees', async () => {
    const { page, complaints, close } = await app.open()
    await page.goto('/plan/review')
    await page.locator('[data-testid=answers]').waitFor()
    await page.getByRole('button', { name: 'Check in the simulator' }).click()
    await page.getByText(/^All \d+ figures agree within what is allowed\.$/).waitFor({ timeout: 60_000 })
    const rows = page.getByRole('table', { name: 'Plan against simulator' }).locator('tbody tr')
    expect(await rows.count()).toBeGreaterThanOrEqual(6)
    await expectAccessible(page, 'review with its check')
    expect(complaints).toEqual([])
    await close()
  }, 120_000)
})
