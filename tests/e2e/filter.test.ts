import type { Page } from 'playwright-core'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { firstExample } from '#client/features/plan/examples.ts'
import type { DesignDocument } from '#shared/design/schema.ts'
import { expectAccessible, startApp, type TestApp } from './support/app.ts'

const kept = (page: Page): Promise<DesignDocument> =>
  page.evaluate(
    () =>
      (JSON.parse(localStorage.getItem('spandrel.visitor') ?? '{}') as { document: DesignDocument }).document,
  )

/** Its amplifier drives a capacitor through next to nothing, and its own compensation is held too small. */
const ringing: DesignDocument = {
  ...firstExample,
  choose: {
    arrangement: 'non-inverting-up',
    drive: { resistance: 2, capacitance: 2.2e-8 },
    values: { CU1: 1e-12 },
  },
}

async function open(page: Page): Promise<void> {
  await page.goto('/plan/filter')
  await page.locator('[data-testid=answers]').waitFor()
}

describe('the filter of a channel', () => {
  let app: TestApp

  beforeAll(async () => {
    app = await startApp()
  })
  afterAll(() => app?.close())

  it('says how far the alias attenuation is from what is wanted, and takes what would do', async () => {
    const { page, complaints, close } = await app.open()
    await open(page)
    const alias = page.locator('section[aria-label="Alias attenuation"]')
    expect((await alias.innerText()).replaceAll('\u00a0', ' ')).toMatch(/dB of [\d.]+ dB wanted: short by/)
    await alias
      .getByRole('button', { name: /^Take \d poles/ })
      .first()
      .click()
    await expect.poll(async () => (await kept(page)).choose?.filter?.kind).toBe('sallen-key')
    await expect
      .poll(async () => (await alias.innerText()).replaceAll('\u00a0', ' '))
      .toMatch(/dB of [\d.]+ dB wanted\./)
    const sections = page.getByRole('table', { name: 'Sections of the filter' })
    expect(await sections.locator('tbody tr').count()).toBeGreaterThanOrEqual(2)
    expect(complaints).toEqual([])
    await close()
  })

  it('draws curves only once they come into sight, and reads them by keys', async () => {
    const { page, complaints, close } = await app.open({ height: 700 })
    await open(page)
    const loop = page.getByRole('application', { name: /^Loop gain/ })
    expect(await loop.count()).toBe(0)
    await page.locator('section[aria-label=Stability] summary').first().click()
    await loop.waitFor()
    await page.locator('section[aria-label=Response]').scrollIntoViewIfNeeded()
    const plot = page.getByRole('application', { name: /^Frequency response/ })
    await plot.focus()
    await page.keyboard.press('l')
    const readout = page.locator('.d-curves .d-readout').first()
    // The first mark is the signal bandwidth of the example.
    await expect
      .poll(async () => (await readout.innerText()).replaceAll('\u00a0', ' '))
      .toMatch(/^At 20 Hz: /)
    await page.keyboard.press('l')
    await expect
      .poll(async () => (await readout.innerText()).replaceAll('\u00a0', ' '))
      .toMatch(/Response against DC −3(\.0\d)? dB/)
    await page.keyboard.press('Escape')
    await expect.poll(() => readout.innerText()).toBe('')
    expect(complaints).toEqual([])
    await close()
  })

  it('takes a cure for an amplifier that rings, and says that it is steady', async () => {
    const { page, close } = await app.open()
    await page.goto('/plan/filter')
    await page.evaluate((work) => localStorage.setItem('spandrel.visitor', JSON.stringify(work)), {
      version: 1,
      document: ringing,
      savedAt: '2026-04-17T10:00:00Z',
      typed: {},
    })
    await page.reload()
    const stability = page.locator('section[aria-label=Stability]')
    const state = stability.locator('tbody td').last()
    await expect.poll(() => state.innerText()).toContain('over')
    await stability.getByRole('button', { name: /^Take .*Ω for R9/ }).click()
    await expect.poll(() => state.innerText()).toContain('clear')
    await expect
      .poll(async () => Object.keys((await kept(page)).choose?.values ?? {}).sort())
      .toEqual(['C9', 'CU1', 'R9'])
    await page.keyboard.press('Control+z')
    await expect.poll(() => state.innerText()).toContain('over')
    await close()
  })

  it('judges the drive by three criteria, also behind a multiplexer', async () => {
    const { page, close } = await app.open()
    await open(page)
    const drive = page.locator('section[aria-label="Drive of the converter"]')
    expect(await drive.locator('tbody tr').count()).toBe(3)
    await page.goto('/plan/converter')
    await page.getByText('Sampling: kind of converter').click()
    await page.locator('#field-converter-multiplexed-channels').fill('8')
    await expect.poll(async () => (await kept(page)).converter.multiplexed?.channels).toBe(8)
    await open(page)
    await drive.getByText(/From the channel before, 8 channels/).waitFor()
    await close()
  })

  it.each([
    ['light', 1440],
    ['dark', 320],
  ] as const)(
    'has nothing that axe objects to with all plots drawn, in %s at %i px',
    async (theme, width) => {
      const { page, complaints, close } = await app.open({ theme, width })
      await open(page)
      await page.evaluate(() => {
        for (const fold of document.querySelectorAll('details')) fold.open = true
      })
      for (const what of ['section[aria-label=Response]', 'section[aria-label=Stability] details'])
        await page.locator(what).first().scrollIntoViewIfNeeded()
      await page.getByRole('application', { name: /^Loop gain/ }).waitFor()
      await expectAccessible(page, `filter, ${theme}, ${width}`)
      expect(
        await page.evaluate(() => document.documentElement.scrollWidth - window.innerWidth),
      ).toBeLessThanOrEqual(0)
      expect(complaints).toEqual([])
      await close()
    },
  )
})
