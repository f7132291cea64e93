import type { Page } from 'playwright-core'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import type { DesignDocument } from '#shared/design/schema.ts'
import { planDesign, prepareCandidate } from '#shared/design/plan-design.ts'
import { toYieldWords } from '#shared/note/quality-tables.ts'
import { runSpread } from '#shared/studies/spread.ts'
import { expectAccessible, startApp, type TestApp } from './support/app.ts'

const kept = (page: Page): Promise<DesignDocument> =>
  page.evaluate(
    () =>
      (JSON.parse(localStorage.getItem('spandrel.visitor') ?? '{}') as { document: DesignDocument }).document,
  )

const spaced = (text: string) => text.replaceAll('\u00a0', ' ')

async function openWithTarget(page: Page, percent: string): Promise<void> {
  await page.goto('/plan/errors')
  await page.locator('[data-testid=answers]').waitFor()
  await page.locator('#field-target-limit').fill(percent)
  await page.getByText(/^in this browser/).waitFor()
  await page.getByText(/it (meets|misses) the target/).waitFor()
}

describe('the errors of a channel', () => {
  let app: TestApp

  beforeAll(async () => {
    app = await startApp()
  })
  afterAll(() => app?.close())

  it('say first whether the target is met, and what dominates', async () => {
    const { page, complaints, close } = await app.open()
    await openWithTarget(page, '0.2')
    await page.getByText(/After zero and span it meets the target of ±10\s/).waitFor()
    const head = await page.locator('.verdict-head').first().innerText()
    expect(spaced(head)).toMatch(/expanded uncertainty is ±[\d.]+ mm\/s, 95 % coverage, k = [\d.]+\./)
    expect(spaced(head)).toMatch(/makes? \d+ % of the variance/)
    await page.locator('#field-target-limit').fill('0.05')
    await page.getByText(/After zero and span it misses the target of ±2\.5\s/).waitFor()
    expect(complaints).toEqual([])
    await close()
  })

  it('show each state in four ways of saying it, referred to either end', async () => {
    const { page, close } = await app.open()
    await openWithTarget(page, '0.2')
    const plan = planDesign(await kept(page))
    const budget = plan.candidates[plan.chosen ?? 0]?.budget
    const totals = page.locator('.totals-table')
    await page.getByRole('radio', { name: 'As built' }).check()
    await totals.getByText(/^Totals as built/).waitFor()
    const cells = (await totals.locator('tbody tr').last().locator('td').allInnerTexts()).map(spaced)
    const built = budget?.totals.asBuilt.expanded ?? 0
    // Printed with three digits and never smaller than it is.
    const [measurand = '', volts = '', codes = ''] = cells
    expect(measurand).toMatch(/mm\/s$/)
    expect(parseFloat(volts)).toBeGreaterThanOrEqual(built * 1e3 * 0.999)
    expect(parseFloat(volts)).toBeLessThan(built * 1e3 * 1.11)
    expect(parseFloat(codes)).toBeGreaterThanOrEqual(Math.floor(built / plan.lsb))
    await page.getByRole('radio', { name: 'At the converter' }).check()
    await expect.poll(() => page.locator('.error-total').innerText()).toMatch(/V/)
    await close()
  })

  it('lead from a term to what sets it, and walk through the terms by keys', async () => {
    const { page, close } = await app.open()
    await openWithTarget(page, '0.2')
    const names = page.locator('.error-name')
    await names.first().focus()
    await page.keyboard.press('ArrowDown')
    expect(await page.evaluate(() => document.activeElement?.textContent)).toBe(
      await names.nth(1).innerText(),
    )
    await page.keyboard.press('Enter')
    await page.waitForURL('**/plan/parts')
    await expect.poll(() => page.evaluate(() => document.activeElement?.id)).toMatch(/^field-/)
    await close()
  })

  it('take an improvement by one control, and undo takes it back', async () => {
    const { page, close } = await app.open()
    await openWithTarget(page, '0.05')
    const take = page.locator('section[aria-label="What would improve it"] .text-button').first()
    await take.waitFor()
    const before = JSON.stringify(await kept(page))
    const total = () => page.locator('.error-total b').innerText()
    const was = parseFloat(await total())
    await take.click()
    await expect.poll(async () => JSON.stringify(await kept(page))).not.toBe(before)
    await expect.poll(async () => parseFloat(await total())).toBeLessThan(was)
    await page.keyboard.press('Control+z')
    await expect.poll(async () => JSON.stringify(await kept(page))).toBe(before)
    await close()
  })

  it('build boards in the browser that are those of the engine, seed for seed', async () => {
    const { page, complaints, close } = await app.open()
    await openWithTarget(page, '0.1')
    await page.locator('#field-analysis-boards').fill('3000')
    await page.locator('#field-analysis-seed').fill('7')
    await expect.poll(async () => (await kept(page)).analysis).toEqual({ boards: 3000, seed: 7 })
    await page.getByText('target met').or(page.getByText('target missed')).first().waitFor()
    await page.getByRole('button', { name: 'Build boards' }).click()
    await page.getByText('3000 of 3000 boards, seed 7.').waitFor()
    const document = await kept(page)
    const plan = planDesign(document)
    const chosen = plan.candidates[plan.chosen ?? 0]
    const prepared = chosen ? prepareCandidate(document, chosen) : null
    if (!prepared) throw new Error('nothing to build')
    const words = toYieldWords(runSpread(prepared))
    expect(spaced(await page.locator('.verdict-line b').innerText())).toBe(`${spaced(words ?? '')}.`)
    await page.getByRole('button', { name: 'Build again' }).waitFor()

    await page.locator('#field-target-limit').fill('0.2')
    await page.getByText(/The design has changed since/).waitFor()
    expect(complaints).toEqual([])
    await close()
  })

  it('stop a long run and keep what there is', async () => {
    const { page, close } = await app.open()
    await openWithTarget(page, '0.2')
    await page.locator('#field-analysis-boards').fill('1000000')
    await expect.poll(async () => (await kept(page)).analysis?.boards).toBe(1e6)
    await page.waitForTimeout(800)
    await page.getByRole('button', { name: 'Build boards' }).click()
    await page.getByText(/still building/).waitFor()
    await page.getByRole('button', { name: 'Stop' }).click()
    await page.getByText(/stopped; the figures are those of the boards built by then/).waitFor()
    expect(await page.locator('.d-spread svg').count()).toBe(1)
    await close()
  })

  it.each([
    ['light', 1440],
    ['dark', 320],
  ] as const)(
    'have nothing that axe objects to with all folds open, in %s at %i px',
    async (theme, width) => {
      const { page, complaints, close } = await app.open({ theme, width })
      await openWithTarget(page, '0.2')
      await page.getByRole('button', { name: 'Build boards' }).click()
      await page.getByText('10 000 of 10 000 boards').waitFor()
      await page.evaluate(() => {
        for (const fold of document.querySelectorAll('details')) fold.open = true
      })
      await page.locator('section[aria-label=Noise] .plan-curves').scrollIntoViewIfNeeded()
      await page.locator('[aria-roledescription=plot]').first().waitFor()
      await expectAccessible(page, `errors, ${theme}, ${width}`)
      expect(
        await page.evaluate(() => document.documentElement.scrollWidth - window.innerWidth),
      ).toBeLessThanOrEqual(0)
      expect(complaints).toEqual([])
      await close()
    },
  )
})
