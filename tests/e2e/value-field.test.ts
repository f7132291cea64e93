import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import type { Locator, Page } from 'playwright-core'
import { startApp, type TestApp, type TestPage } from './support/app.ts'

let app: TestApp
let test: TestPage
let page: Page

beforeAll(async () => {
  app = await startApp()
}, 60_000)

afterAll(() => app.close())

/** The positive rail on the front page, in volts. */
const rail = (): Locator => page.locator('input[id="rails.positive"], input[id$="rails-positive"]')

/** What stands under the field: how it was read, a question, or an error. */
async function says(): Promise<string> {
  const ids = ((await rail().getAttribute('aria-describedby')) ?? '').split(' ')
  const texts = await Promise.all(ids.map((id) => page.locator(`[id="${id}"]`).textContent()))
  return texts.join(' ').replaceAll('\u00a0', ' ')
}

async function openFront() {
  test = await app.open()
  page = test.page
  await page.goto('/')
  await rail().waitFor()
}

describe('a value field', () => {
  it('leaves typed text alone and says how it was read once it is left', async () => {
    await openFront()
    await rail().fill('3V3')
    expect(await says()).not.toContain('Read as')
    await rail().press('Tab')
    expect(await rail().inputValue()).toBe('3V3')
    expect(await says()).toContain('Read as 3.3 V')
    await test.close()
  })

  it('says what is wrong only when it is left, and keeps the text', async () => {
    await openFront()
    await rail().fill('abc')
    expect(await rail().getAttribute('aria-invalid')).toBeNull()
    await rail().press('Tab')
    expect(await rail().inputValue()).toBe('abc')
    expect(await rail().getAttribute('aria-invalid')).toBe('true')
    expect(await says()).toContain('is not a number')
    await test.close()
  })

  it('asks once what 4.096 means, by keyboard, and then holds to the answer', async () => {
    await openFront()
    await rail().fill('4.096')
    expect(await says()).toContain('4.096 V or 4096 V')
    await rail().press('Tab')
    expect(await page.evaluate(() => document.activeElement?.textContent)).toBe('4.096\u00a0V')
    await page.keyboard.press('Enter')
    expect(await rail().inputValue()).toBe('4.096')
    expect(await says()).toContain('Read as 4.096 V')
    await rail().fill('5.125')
    await rail().press('Tab')
    expect(await says()).toContain('Read as 5.125 V')
    await test.close()
  })

  it('steps the last shown digit, ten with Shift, and takes back with Escape', async () => {
    await openFront()
    await rail().fill('3.30')
    await rail().press('ArrowUp')
    expect(await rail().inputValue()).toBe('3.31')
    await rail().press('Shift+ArrowDown')
    expect(await rail().inputValue()).toBe('3.21')
    await rail().press('Escape')
    expect(await rail().inputValue()).toBe('5')
    await test.close()
  })

  it('works out arithmetic, shows the result when left and the text when entered again', async () => {
    await openFront()
    await rail().fill('=2*1,65')
    await expect.poll(says, { timeout: 20_000 }).not.toContain('worked out')
    await rail().press('Tab')
    await expect.poll(says, { timeout: 20_000 }).toContain('Read as 3.3 V')
    expect(await rail().inputValue()).toBe('3.3')
    await rail().focus()
    expect(await rail().inputValue()).toBe('=2*1,65')
    expect(test.complaints).toEqual([])
    await test.close()
  })
})
