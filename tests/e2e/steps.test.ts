import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { planDesign } from '#shared/design/plan-design.ts'
import { expectAccessible, startApp, type TestApp } from './support/app.ts'

const steps = [
  ['measurand', 'Step 1 of 8: Measurand'],
  ['sensor', 'Step 2 of 8: Sensor'],
  ['converter', 'Step 3 of 8: Converter'],
  ['stages', 'Step 4 of 8: Stages'],
  ['parts', 'Step 5 of 8: Parts'],
  ['filter', 'Step 6 of 8: Filter'],
  ['errors', 'Step 7 of 8: Errors'],
  ['review', 'Step 8 of 8: Review'],
] as const

describe('the steps of a plan', () => {
  let app: TestApp

  beforeAll(async () => {
    app = await startApp()
  })
  afterAll(() => app?.close())

  describe.each([
    ['light', 1440],
    ['dark', 375],
  ] as const)('in %s at %i px', (theme, width) => {
    it.each<readonly [string, string]>([['', 'Plan'], ...steps])(
      '%s has nothing that axe objects to',
      async (step, title) => {
        const { page, complaints, close } = await app.open({ theme, width })
        await page.goto(step === '' ? '/' : `/plan/${step}`)
        await page.locator('[data-testid=answers]').waitFor()
        await expect.poll(() => page.title()).toMatch(new RegExp(`^${title}`))
        // Folded groups hold fields as well.
        await page.evaluate(() => {
          for (const fold of document.querySelectorAll<HTMLDetailsElement>('details.plan-fold'))
            fold.open = true
        })
        await expectAccessible(page, `${step || 'front page'}, ${theme}, ${width}`)
        expect(complaints).toEqual([])
        await close()
      },
    )
  })

  it.each([320, 768, 1024, 1920])('fit a page of %i px without scrolling sideways', async (width) => {
    const { page, close } = await app.open({ width })
    for (const path of ['/', ...steps.map(([step]) => `/plan/${step}`)]) {
      await page.goto(path)
      await page.locator('[data-testid=answers]').waitFor()
      const beyond = await page.evaluate(() => document.documentElement.scrollWidth - window.innerWidth)
      expect(beyond, path).toBeLessThanOrEqual(0)
    }
    await close()
  })

  it('lead on and back by links named after their target, and by Ctrl+Enter', async () => {
    const { page, close } = await app.open()
    await page.goto('/plan/measurand')
    await page.getByRole('heading', { name: 'Measurand', level: 1 }).waitFor()
    for (const [step, title] of steps.slice(1)) {
      await page.keyboard.press('Control+Enter')
      await page.waitForURL(`**/plan/${step}`)
      await expect.poll(() => page.title()).toMatch(new RegExp(`^${title}`))
      await expect
        .poll(() => page.locator('[aria-current=step]').first().innerText())
        .toContain(title.split(': ')[1])
    }
    await page.getByRole('link', { name: 'Errors', exact: true }).last().click()
    await page.waitForURL('**/plan/errors')
    await page.goBack()
    await page.waitForURL('**/plan/review')
    await close()
  })

  it('lead from each answer of the review to its field', async () => {
    const { page, close } = await app.open()
    await page.goto('/plan/review')
    await page.getByRole('link', { name: 'Change Rail tolerance' }).click()
    await page.waitForURL('**/plan/converter')
    await expect.poll(() => page.evaluate(() => document.activeElement?.id)).toBe('field-rails-tolerance')
    await page.goBack()
    await page.waitForURL('**/plan/review')
    await close()
  })

  it('obey a fixed value and say what it does', async () => {
    const { page, close } = await app.open()
    await page.goto('/plan/parts')
    const fix = page.locator('#field-choose-values-Rf')
    await fix.fill('33k')
    await page.getByText('33k', { exact: true }).first().waitFor()
    await page
      .getByText(/fixed values are obeyed|off by/i)
      .first()
      .waitFor()
    await page.getByRole('button', { name: 'Free Rf' }).click()
    await expect.poll(() => fix.inputValue()).toBe('')
    await close()
  })

  it('plan an arrangement that a person asks for', async () => {
    const { page, close } = await app.open()
    await page.goto('/plan/stages')
    await page.getByRole('radio', { name: /^Inverting amplifier, offset up/ }).check()
    await page.locator('.chain').getByText('Inverting amplifier, offset up').waitFor()
    await page.getByRole('radio', { name: /^Let the plan choose/ }).check()
    await page.locator('.chain').getByText('Non-inverting amplifier, offset up').waitFor()
    await close()
  })

  it('never keep the page from taking keys while a plan is computed', async () => {
    const { page, close } = await app.open()
    await page.goto('/')
    await page.locator('[data-testid=answers]').waitFor()
    await page.getByRole('button', { name: 'Start from' }).click()
    await page.getByRole('menuitem', { name: /bridge of 2 mV/ }).click()
    await page.getByText('Stilling-well level', { exact: true }).first().waitFor()
    await page.getByText(/^in this browser/).waitFor()
    await page.waitForTimeout(1500)
    await page.evaluate(() => {
      const held = globalThis as unknown as { longest: number }
      held.longest = 0
      new PerformanceObserver((list) => {
        for (const entry of list.getEntries()) held.longest = Math.max(held.longest, entry.duration)
      }).observe({ type: 'longtask', buffered: false })
    })
    const field = page.getByLabel('Excitation voltage')
    await field.fill('')
    await field.pressSequentially('4.8765', { delay: 120 })
    await page.waitForTimeout(1500)
    const longest = await page.evaluate(() => (globalThis as unknown as { longest: number }).longest)
    // The same plan computed here, under the same load: on the page's own thread it would be one task of this length.
    const document = await page.evaluate(
      () => (JSON.parse(localStorage.getItem('spandrel.visitor') ?? '{}') as { document: unknown }).document,
    )
    planDesign(document)
    const start = performance.now()
    planDesign(document)
    const alone = performance.now() - start
    expect(longest).toBeLessThan(alone * 0.7)
    await close()
  })
})
