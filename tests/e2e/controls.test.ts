import type { Page } from 'playwright-core'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { fieldAt, leavesOf, type FieldSpec } from '#client/features/plan/form/introspect.ts'
import { getAt, type DraftDocument } from '#client/features/plan/draft/paths.ts'
import { fieldId, steps } from '#client/features/plan/words/steps.ts'
import { planDesign } from '#shared/design/plan-design.ts'
import { designSchema } from '#shared/design/schema.ts'
import { startApp, type TestApp } from './support/app.ts'

/** Keys without a control of their own yet, each with what it waits for; the list may only shrink. */
const without = ['parts.amplifier.typical']

/** What stands in a field that holds nothing and whose default is not a figure. */
const typedWhereOpen: Readonly<Record<string, string>> = {
  'sensor.bandwidth': '20',
  'sensor.bandLow': '0.1',
  'sensor.commonMode.low': '2.4',
  'sensor.commonMode.high': '2.6',
  'sensor.beyond.low': '-0.36',
  'sensor.beyond.high': '0.36',
  'sensor.fault.low': '-12',
  'sensor.fault.high': '12',
  'sensor.temperature.low': '-10',
  'sensor.temperature.high': '40',
  'converter.guard.low': '8',
  'converter.guard.high': '5',
  'converter.commonMode.low': '0',
  'converter.commonMode.high': '2.5',
  'converter.supply': '3.3',
  'rules.aliasAttenuation': '10',
  'parts.resistors.tracking': '5 ppm',
  'parts.resistors.ratioTolerance': '0.05',
  'parts.amplifier.vosCommonMode': '2.5',
  'choose.filter.corner': '200',
  'choose.drive.resistance': '1k',
  'choose.drive.capacitance': '1u',
  'target.limit': '0.5',
}

const sections = Object.keys(designSchema.shape).filter((key) => !['format', 'notes', 'choose'].includes(key))

const expectedLeaves = (kind: string): FieldSpec[] =>
  sections
    .flatMap((section) => leavesOf(fieldAt(section, kind)))
    .filter(
      ({ path }) => !without.some((beginning) => path === beginning || path.startsWith(`${beginning}.`)),
    )

async function openStep(page: Page, step: string): Promise<string[]> {
  await page.goto(`/plan/${step}`)
  await page.locator('[data-testid=answers]').waitFor()
  await page.evaluate(() => {
    for (const fold of document.querySelectorAll<HTMLDetailsElement>('details.plan-fold')) fold.open = true
  })
  return page.evaluate(() => [...document.querySelectorAll('[id^=field-]')].map((element) => element.id))
}

const stored = (page: Page): Promise<DraftDocument> =>
  page.evaluate(() => {
    const kept: unknown = JSON.parse(localStorage.getItem('spandrel.visitor') ?? 'null')
    return (kept as { document: DraftDocument }).document
  })

describe('every control of the plan', () => {
  let app: TestApp

  beforeAll(async () => {
    app = await startApp()
  })
  afterAll(() => app?.close())

  it.each([
    ['voltage', 'differential'],
    ['bridge', 'Stilling-well level, bridge of 2 mV/V'],
  ])('of a %s sensor stands on a step, and every key of the design has one', async (kind) => {
    const { page, close } = await app.open()
    await page.goto('/')
    await page.locator('[data-testid=answers]').waitFor()
    if (kind === 'bridge') {
      await page.getByRole('button', { name: 'Start from' }).click()
      await page.getByRole('menuitem', { name: /bridge of 2 mV/ }).click()
      await page.getByText('Stilling-well level', { exact: true }).first().waitFor()
    } else {
      await page.goto('/plan/sensor')
      await page.locator('#field-sensor-wiring').selectOption('differential')
      await page.locator('#field-sensor-commonMode-low').fill('2.4')
      await page.locator('#field-sensor-commonMode-high').fill('2.6')
    }
    await page.goto('/plan/measurand')
    await page.locator('#field-target-limit').fill('0.5')
    // Keys of a kind of converter, and of a multiplexer, stand once there is one.
    await openStep(page, 'converter')
    await page.locator('#field-converter-architecture').selectOption('oversampling')
    await page.locator('#field-converter-multiplexed-channels').fill('4')
    await page.getByText(/^in this browser/).waitFor()
    await page.waitForTimeout(600)
    const found = new Set<string>()
    for (const { id } of steps) for (const control of await openStep(page, id)) found.add(control)
    const missing = expectedLeaves(kind)
      .map(({ path }) => path)
      // A shared source has no voltage of its own to ask for.
      .filter((path) => path !== 'shiftReference.voltage' && !found.has(fieldId(path)))
    expect(missing).toEqual([])
    await close()
  })

  it('sets its key of the design, and the server plans the same from what is kept', async () => {
    const { page, close, complaints } = await app.open()
    const filled: string[] = []
    for (const { id } of steps.slice(0, -1)) {
      await openStep(page, id)
      const inputs = await page
        .locator('.plan-work input[type=text][id^=field-]:not(:disabled)')
        .evaluateAll((list) =>
          list.map((element) => ({
            id: element.id,
            value: (element as HTMLInputElement).value,
            placeholder: (element as HTMLInputElement).placeholder,
          })),
        )
      for (const { id: control, value, placeholder } of inputs) {
        const open = Object.entries(typedWhereOpen).find(([path]) => fieldId(path) === control)?.[1]
        const text = value || open || placeholder
        if (text === '' || text === 'none' || /plan/.test(text)) continue
        await page.locator(`[id="${control}"]`).fill('')
        await page.locator(`[id="${control}"]`).fill(text)
        filled.push(control)
      }
      for (const box of await page.locator('.plan-work input[type=checkbox][id^=field-]').all()) {
        await box.click()
        await box.click()
      }
      await page.waitForTimeout(600)
    }
    expect(filled.length).toBeGreaterThan(90)
    // Nothing that was typed is refused: each value stood as a default or an example in its own field.
    expect(
      await page.locator('.findings [data-severity=over], .findings [data-severity=open]').allInnerTexts(),
    ).toEqual([])
    const document = await stored(page)
    const unset = filled.filter(
      (control) =>
        ![...expectedLeaves('voltage').map(({ path }) => path), ...Object.keys(typedWhereOpen)].some(
          (path) => fieldId(path) === control && getAt(document, path) !== undefined,
        ) && !control.startsWith('field-choose-values-'),
    )
    expect(unset).toEqual([])
    const values = getAt(document, 'choose.values') as Record<string, number>
    expect(Object.keys(values)).toEqual(expect.arrayContaining(['R1', 'R2', 'Rf', 'Rg']))

    const answer = await page.request.post('/api/plan', { data: document, headers: { 'X-Spandrel': '1' } })
    expect(answer.status()).toBe(200)
    const here: unknown = JSON.parse(JSON.stringify(planDesign(document)))
    expect(await answer.json()).toEqual(here)
    await page.goto('/plan/review')
    const [file] = await Promise.all([
      page.waitForEvent('download'),
      page.getByRole('button', { name: 'Plan, JSON', exact: true }).click(),
    ])
    const chunks: Buffer[] = []
    for await (const chunk of await file.createReadStream()) chunks.push(chunk as Buffer)
    expect(JSON.parse(Buffer.concat(chunks).toString('utf8'))).toEqual(here)
    expect(complaints).toEqual([])
    await close()
  }, 300_000)
})
