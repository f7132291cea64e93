import { readFileSync } from 'node:fs'
import { join } from 'node:path'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { demoPassword } from '#server/demo/accounts.ts'
import { expectAccessible, startApp, type TestApp, type TestPage } from './support/app.ts'

let app: TestApp

beforeAll(async () => {
  app = await startApp()
}, 60_000)

afterAll(() => app.close())

const example: unknown = JSON.parse(
  readFileSync(join(import.meta.dirname, '../../docs/examples/flow-velocity.json'), 'utf8'),
)

async function signIn({ page }: TestPage, email: string) {
  await page.goto('/sign-in')
  await page.getByLabel('E-mail address').fill(email)
  await page.getByLabel('Password').fill(demoPassword)
  await page.getByRole('button', { name: 'Sign in' }).click()
  await page.getByRole('heading', { name: 'Projects', exact: true }).waitFor()
}

async function openBoard(test: TestPage) {
  await test.page.getByRole('link', { name: 'Gauging station 4' }).click()
  await test.page.getByRole('grid').getByRole('link').first().waitFor()
}

describe('joining', () => {
  it('puts focus on a summary of what is wrong, in the words that stand beside the fields', async () => {
    const test = await app.open()
    const { page } = test
    await page.goto('/join')
    await page.getByRole('button', { name: 'Join' }).click()
    const summary = page.getByRole('group', { name: '4 answers need a change' })
    await summary.waitFor()
    expect(await summary.evaluate((element) => element === document.activeElement)).toBe(true)
    expect(await page.title()).toMatch(/^Error: Join/)
    for (const link of await summary.getByRole('link').allTextContents())
      expect(await page.getByText(link, { exact: true }).count()).toBe(2)
    await summary.getByRole('link').first().click()
    expect(await page.getByLabel('Your name').evaluate((element) => element === document.activeElement)).toBe(
      true,
    )
    await expectAccessible(page, 'join with errors')
    expect(test.complaints).toEqual([])
    await test.close()
  })

  it('takes the visitor’s plan into the new workspace, and lets the person out and in again', async () => {
    const test = await app.open()
    const { page } = test
    await page.goto('/help')
    await page.evaluate(
      (document) =>
        localStorage.setItem(
          'spandrel.visitor',
          JSON.stringify({ version: 1, document, savedAt: new Date().toISOString() }),
        ),
      example,
    )
    await page.goto('/join')
    await page.getByLabel('Your name').fill('Wren Asher')
    await page.getByLabel('E-mail address').fill('wren@asher.example')
    await page.getByLabel('Password').fill('heron and willow 4')
    await page.getByLabel('Name of the workspace').fill('Asher Works')
    await page.getByRole('button', { name: 'Join' }).click()
    await page.waitForURL(/\/channels\/[^/]+\/plan\/measurand$/)
    expect(await page.evaluate(() => localStorage.getItem('spandrel.visitor'))).toBeNull()
    await page.getByRole('link', { name: 'Projects' }).click()
    await page.getByRole('link', { name: 'From this browser' }).click()
    await expect.poll(() => page.getByRole('grid').getByRole('link').count()).toBe(1)
    await page.getByRole('button', { name: 'Account of Wren Asher' }).click()
    await page.getByRole('menuitem', { name: 'Sign out' }).click()
    await page.getByRole('link', { name: 'Sign in' }).waitFor()
    await page.goto('/w/quellmoor/projects')
    await page.waitForURL(/\/sign-in\?next=/)
    await test.close()
  })
})

describe('the list of channels', () => {
  it('says for every channel where its room is, and is one tab stop with arrows inside', async () => {
    const test = await app.open()
    const { page } = test
    await signIn(test, 'engineer@quellmoor.example')
    await openBoard(test)
    const grid = page.getByRole('grid')
    const count = await grid.locator('.channel-name').count()
    expect(count).toBeGreaterThan(3)
    await page.waitForFunction(() => !document.querySelector('.channel-room .dash'), undefined, {
      timeout: 50_000,
    })
    for (const text of await grid.locator('.channel-room').allTextContents())
      expect(text).toMatch(/% (above|below|both ways)|Clips at|No arrangement/)
    expect(await grid.locator('a[tabindex="0"], td[tabindex="0"], button[tabindex="0"]').count()).toBe(1)
    const place = () =>
      page.evaluate(() => document.activeElement?.closest('[data-cell]')?.getAttribute('data-cell'))
    await grid.getByRole('link').first().focus()
    await page.keyboard.press('ArrowDown')
    expect(await place()).toBe('1:1')
    await page.keyboard.press('Control+End')
    expect(await place()).toBe(`${count - 1}:8`)
    await page.keyboard.press('ArrowUp')
    expect(await place()).toBe(`${count - 2}:8`)
    await page.keyboard.press('Home')
    await page.keyboard.press('Space')
    expect(await grid.locator('tr[aria-selected="true"]').count()).toBe(1)
    await expectAccessible(page, 'channels')
    await page.keyboard.press('/')
    await page.keyboard.type('battery')
    expect(await grid.locator('.channel-name').count()).toBe(1)
    expect(test.complaints).toEqual([])
    await test.close()
  })

  it('copies, renames, deletes and brings back', async () => {
    const test = await app.open()
    const { page } = test
    await signIn(test, 'engineer@quellmoor.example')
    await openBoard(test)
    const names = page.getByRole('grid').locator('.channel-name a')
    const before = await names.count()
    const more = (name: string) => page.getByRole('row').filter({ hasText: name }).getByRole('button').click()
    await more('Conductivity')
    await page.getByRole('menuitem', { name: 'Copy' }).click()
    await page
      .getByText(/was copied to CH/)
      .first()
      .waitFor()
    await expect.poll(() => names.count()).toBe(before + 1)
    await more('Conductivity, copy')
    await page.getByRole('menuitem', { name: 'Name, number and location' }).click()
    await page.getByRole('dialog').getByLabel('Name', { exact: true }).fill('Conductivity, spare')
    await expectAccessible(page, 'dialog')
    await page.getByRole('dialog').getByRole('button', { name: 'Save' }).click()
    await page.getByRole('link', { name: 'Conductivity, spare' }).waitFor()
    await more('Conductivity, spare')
    await page.getByRole('menuitem', { name: 'Delete' }).click()
    await expect.poll(() => names.count()).toBe(before)
    await page.getByRole('button', { name: 'Undo' }).click()
    await page.getByRole('link', { name: 'Conductivity, spare' }).waitFor()
    expect(test.complaints).toEqual([])
    await test.close()
  })

  it('shows a reader everything and lets them change nothing, and says who can', async () => {
    const test = await app.open()
    const { page } = test
    await signIn(test, 'reader@quellmoor.example')
    await openBoard(test)
    const add = page.getByRole('button', { name: 'Add a channel' })
    expect(await add.getAttribute('aria-disabled')).toBe('true')
    expect(await add.getAttribute('aria-description')).toContain('engineer')
    await page.getByRole('row').filter({ hasText: 'Conductivity' }).first().getByRole('button').click()
    expect(await page.getByRole('menuitem', { name: 'Delete' }).getAttribute('aria-disabled')).toBe('true')
    await test.close()
  })

  it('looks to strangers as if it did not exist', async () => {
    const test = await app.open()
    const { page } = test
    await signIn(test, 'consultant@sedgeworth.example')
    await page.goto('/w/quellmoor/projects')
    await page.getByRole('heading', { name: 'Not found' }).waitFor()
    await test.close()
  })
})

describe('pages at all widths and in both themes', () => {
  it.each(['/sign-in', '/join', '/help', '/help/keys', '/account/units', '/nowhere'])(
    '%s fits, is accessible and says nothing in the console',
    async (path) => {
      for (const theme of ['light', 'dark'] as const) {
        const test = await app.open({ theme, width: 320, height: 700 })
        await test.page.goto(path)
        await test.page.getByRole('heading', { level: 1 }).waitFor()
        for (const width of [320, 768, 1440]) {
          await test.page.setViewportSize({ width, height: 800 })
          const wide = await test.page.evaluate(
            () => document.documentElement.scrollWidth - document.documentElement.clientWidth,
          )
          expect(wide, `${path} at ${width}`).toBe(0)
        }
        await expectAccessible(test.page, `${path}, ${theme}`)
        expect(test.complaints).toEqual([])
        await test.close()
      }
    },
  )

  it('the list of channels fits at 320 px', async () => {
    const test = await app.open({ width: 320, height: 700 })
    await signIn(test, 'engineer@quellmoor.example')
    await openBoard(test)
    const wide = await test.page.evaluate(
      () => document.documentElement.scrollWidth - document.documentElement.clientWidth,
    )
    expect(wide).toBe(0)
    await expectAccessible(test.page, 'channels at 320 px')
    await test.close()
  })
})
