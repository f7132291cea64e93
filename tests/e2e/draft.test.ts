import type { Page } from 'playwright-core'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { startApp, type TestApp, type TestPage } from './support/app.ts'

const output = (page: Page) => page.getByLabel('Sensor output, high')

describe('a visitor’s draft', () => {
  let app: TestApp

  beforeAll(async () => {
    app = await startApp()
  })
  afterAll(() => app?.close())

  it('survives a reload, with text that cannot be read yet', async () => {
    const { page, close } = await app.open()
    await page.goto('/')
    await page.getByLabel('Source resistance').fill('1k5')
    await output(page).fill('0,3x')
    await page.getByText('Sensor output, high cannot be read').waitFor()
    await page.getByText('These are the last good levels').waitFor()
    await page.getByText(/^in this browser/).waitFor()
    await page.reload()
    await expect.poll(() => output(page).inputValue()).toBe('0,3x')
    expect(await page.getByLabel('Source resistance').inputValue()).toMatch(/^1\.5\sk$/)
    await output(page).fill('0,3')
    await expect.poll(() => page.getByText('cannot be read').count()).toBe(0)
    await close()
  })

  it('takes back and does again by keys, field by field', async () => {
    const { page, close } = await app.open()
    await page.goto('/')
    await output(page).pressSequentially('9')
    await output(page).fill('0.5')
    await page.getByLabel('Converter bits').fill('12')
    await page.keyboard.press('Control+z')
    await expect.poll(() => page.getByLabel('Converter bits').inputValue()).toBe('14')
    expect(await output(page).inputValue()).toBe('0.5')
    await page.keyboard.press('Control+z')
    await expect.poll(() => output(page).inputValue()).toBe('0.35')
    await page.keyboard.press('Control+Shift+z')
    await expect.poll(() => output(page).inputValue()).toBe('0.5')
    await page.keyboard.press('Control+y')
    await expect.poll(() => page.getByLabel('Converter bits').inputValue()).toBe('12')
    await close()
  })

  it('keeps its history while steps are changed', async () => {
    const { page, close } = await app.open()
    await page.goto('/')
    await output(page).fill('0.5')
    await page.keyboard.press('Control+Enter')
    await page.waitForURL('**/plan/measurand')
    await page.getByRole('button', { name: 'Undo: Sensor output, high' }).click()
    await page.goto('/plan/sensor')
    await expect.poll(() => page.locator('#field-sensor-output-high').inputValue()).toBe('0.35')
    await close()
  })

  it('says in two tabs that the other one changed the plan, and overwrites nothing', async () => {
    const { page, context, close } = await app.open()
    await page.goto('/')
    await page.getByLabel('Converter bits').fill('12')
    await page.getByText(/^in this browser/).waitFor()
    const other = await context.newPage()
    await other.goto('/')
    await other.getByLabel('Converter bits').fill('16')
    await page.getByText('This plan was changed in another tab.').waitFor()
    await page.getByRole('button', { name: 'Take the other tab’s' }).click()
    await expect.poll(() => page.getByLabel('Converter bits').inputValue()).toBe('16')
    await close()
  })

  it('walks the findings with F8, to the field on its step', async () => {
    const { page, close } = await app.open()
    await page.goto('/')
    await output(page).fill('nonsense')
    await page.getByText('cannot be read').first().waitFor()
    await page.getByRole('link', { name: 'Filter' }).first().click()
    await page.getByRole('heading', { name: 'Filter', level: 1 }).waitFor()
    await page.keyboard.press('F8')
    await page.waitForURL('**/plan/sensor')
    await expect.poll(() => page.evaluate(() => document.activeElement?.id)).toBe('field-sensor-output-high')
    await close()
  })

  it('starts empty with open questions and plans once they are answered', async () => {
    const { page, close } = await app.open()
    await page.goto('/')
    await page.locator('[data-testid=answers]').waitFor()
    await page.getByRole('button', { name: 'Start from' }).click()
    await page.getByRole('menuitem', { name: 'Start empty' }).click()
    await page.getByText('Open: Sensor output').first().waitFor()
    await page.goto('/plan/measurand')
    await page.locator('#field-sensor-quantity-name').fill('Turbidity')
    await page.locator('#field-sensor-quantity-unit').fill('NTU')
    await page.locator('#field-sensor-quantity-low').fill('0')
    await page.locator('#field-sensor-quantity-high').fill('1k')
    await page.goto('/plan/sensor')
    await page.locator('#field-sensor-output-low').fill('0')
    await page.locator('#field-sensor-output-high').fill('1')
    await page.goto('/plan/converter')
    await page.locator('#field-converter-input-low').fill('0')
    await page.locator('#field-converter-input-high').fill('2.5')
    await page.locator('#field-converter-bits').fill('12')
    await page.locator('#field-rails-positive').fill('5')
    await page.getByText('Direct connection').first().waitFor()
    await page.locator('[data-testid=answers]').waitFor()
    expect(await page.locator('[data-testid=answers] dd:not(.small)').count()).toBe(4)
    await close()
  })
})

const password = 'sluice-gate-and-heron'

async function signIn(page: Page, email: string): Promise<void> {
  await page.goto('/sign-in')
  await page.getByLabel('E-mail address').fill(email)
  await page.getByLabel('Password').fill(password)
  await page.locator('form button[type=submit]').click()
  await page.waitForURL('**/projects**')
}

async function openFirstChannel(page: Page): Promise<string> {
  await page.getByRole('link', { name: 'Gauging station 4' }).first().click()
  await page.waitForURL('**/channels')
  const channels = await page.evaluate(async () => {
    const path = location.pathname.replace(/^\/w\//, '/api/workspaces/')
    const answer = await fetch(path)
    return ((await answer.json()) as { channels: { id: string }[] }).channels
  })
  const plan = `${new URL(page.url()).pathname}/${channels[0]?.id ?? ''}/plan/converter`
  await page.goto(plan)
  await page.locator('[data-testid=answers]').waitFor()
  return plan
}

describe('a channel’s draft', () => {
  let app: TestApp
  let first: TestPage
  let second: TestPage
  let plan: string

  beforeAll(async () => {
    app = await startApp()
    first = await app.open()
    second = await app.open()
    await signIn(first.page, 'engineer@quellmoor.example')
    plan = await openFirstChannel(first.page)
    await signIn(second.page, 'engineer@quellmoor.example')
    await second.page.goto(plan)
    await second.page.locator('[data-testid=answers]').waitFor()
  })
  afterAll(() => app?.close())

  const bits = (page: Page) => page.locator('#field-converter-bits')
  const saved = (page: Page) => page.locator('.title-block dt', { hasText: /^Saved$/ }).waitFor()

  const keptPositiveRail = (page: Page) =>
    page.evaluate(async () => {
      const path = location.pathname.replace(/^\/w\//, '/api/workspaces/').replace(/\/plan\/.*$/, '')
      const answer = (await (await fetch(path)).json()) as { document: { rails: { positive: number } } }
      return answer.document.rails.positive
    })

  it('is saved as it is typed', async () => {
    const { page } = first
    await bits(page).fill('13')
    await page.locator('.title-block dt', { hasText: 'Saving' }).waitFor()
    await saved(page)
    await page.reload()
    await expect.poll(() => bits(page).inputValue()).toBe('13')
  })

  it('tells the second editor who saved first and overwrites nothing', async () => {
    await bits(second.page).fill('15')
    await second.page.getByText(/changed this channel at/).waitFor()
    await first.page.reload()
    await expect.poll(() => bits(first.page).inputValue()).toBe('13')
    await second.page.getByRole('button', { name: /^Compare/ }).click()
    const row = second.page.getByRole('row', { name: /Converter bits/ })
    expect(await row.innerText()).toMatch(/15\s+13/)
    await second.page.getByRole('button', { name: 'Use my figures' }).click()
    await saved(second.page)
    await first.page.reload()
    await expect.poll(() => bits(first.page).inputValue()).toBe('15')
  })

  it('takes the other version on request, with one’s own an undo away', async () => {
    await bits(first.page).fill('11')
    await saved(first.page)
    await second.page.locator('#field-rails-positive').fill('4.9')
    await second.page.getByText(/changed this channel at/).waitFor()
    await second.page.getByRole('button', { name: 'Use the saved figures' }).click()
    await expect.poll(() => bits(second.page).inputValue()).toBe('11')
    await second.page.keyboard.press('Control+z')
    await expect.poll(() => second.page.locator('#field-rails-positive').inputValue()).toBe('4.9')
    // The next test must not open the channel before this change has reached the server.
    await expect.poll(() => keptPositiveRail(second.page), { timeout: 20_000 }).toBe(4.9)
  })

  it('keeps typing without connection, says so, and saves when the server answers again', async () => {
    const { page, context } = first
    await page.reload()
    await page.locator('[data-testid=answers]').waitFor()
    await context.setOffline(true)
    await bits(page).fill('10')
    await page.getByText(/No connection since/).waitFor()
    await bits(page).fill('16')
    await page.getByText('16 bit').first().waitFor()
    await context.setOffline(false)
    await saved(page)
    await page.reload()
    await expect.poll(() => bits(page).inputValue()).toBe('16')
  })

  it('shows a reader the plan without letting it be changed', async () => {
    const reader = await app.open()
    await signIn(reader.page, 'reader@quellmoor.example')
    await reader.page.goto(plan)
    await reader.page.getByText(/Your role reads this channel/).waitFor()
    await expect.poll(() => bits(reader.page).isDisabled()).toBe(true)
    await reader.close()
  })
})
