import { afterAll, beforeAll, expect, test } from 'vitest'
import { openPage } from '../support/browser.ts'
import { openStage, readings, type Stage } from './stage.ts'

/** ASVS V1.2.1: whatever is typed into a text field comes back as that text and as nothing else. */

let stage: Stage
beforeAll(async () => {
  stage = await openStage()
})
afterAll(() => stage.close())

test('negative control: a breach of the content security policy is a complaint', async () => {
  const { page, complaints, context } = await openPage(stage.browser)
  await page.goto(`${stage.server.url}/sign-in`)
  await page.getByLabel('E-mail').waitFor()
  await page.evaluate(() => {
    const image = document.createElement('img')
    image.src = 'http://127.0.0.1:9/x.png'
    document.body.append(image)
  })
  await expect.poll(() => complaints.some((text) => text.startsWith('CSP: img-src'))).toBe(true)
  await context.close()
})

const mark = (name: string) => `<img src=x onerror=hit()>"'&amp;</script><b>${name}`
const turned = '\u202eabc\r\nX-Bad: 1'

/** Elements that only our text could have made, and whether any of it ran. */
const made = () => ({
  elements: document.querySelectorAll('img[src="x"], main b, td b, [onerror]').length,
  ran: 'wasHit' in window,
})

test('ASVS V1.2.1 markup in unit, note and station stays text, on every page that shows it', async () => {
  const { page, context, complaints } = await openPage(stage.browser)
  await page.addInitScript(() => {
    Object.assign(window, { hit: () => Object.assign(window, { wasHit: true }) })
  })
  await page.goto(`${stage.server.url}/settings/stations`)
  await stage.signIn(page, 'administrator')
  await page.goto(`${stage.server.url}/settings/stations`)
  await page.getByLabel('Name of a new station').fill(mark('station'))
  await page.keyboard.press('Enter')
  await page.getByRole('cell', { name: mark('station') }).waitFor()
  expect(await page.evaluate(made)).toEqual({ elements: 0, ran: false })
  await page.goto(`${stage.server.url}/settings/tokens`)
  await page.getByRole('heading', { level: 1 }).waitFor()
  expect(await page.evaluate(made)).toEqual({ elements: 0, ran: false })
  await context.clearCookies()

  await page.goto(`${stage.server.url}/bench?design=DBS-A&channel=1`)
  await stage.signIn(page, 'engineer')
  await page.getByRole('grid').waitFor()
  await page.getByLabel('unit', { exact: true }).fill(mark('unit'))
  await page.keyboard.press('Enter')
  await page.getByLabel('note', { exact: true }).fill(mark('note') + turned)
  await page.keyboard.press('Enter')
  await page.locator('[data-cell="0-measured"]').click()
  await page.evaluate((text) => navigator.clipboard.writeText(text), readings.join('\n'))
  await page.keyboard.press('Control+V')
  await page.getByText('2593', { exact: true }).first().waitFor()
  await page.keyboard.press('Control+Enter')
  await page
    .getByText(/Recorded as .* at \d\d:\d\d:\d\d/)
    .first()
    .waitFor()
  expect(await page.evaluate(made)).toEqual({ elements: 0, ran: false })

  await page.goto(`${stage.server.url}/history?unit=${encodeURIComponent(mark('unit'))}`)
  await page.locator('tbody tr').first().getByRole('link').first().click()
  await page
    .getByRole('heading', { level: 1 })
    .filter({ hasText: mark('unit') })
    .waitFor()
  await expect.poll(() => page.locator('main').textContent()).toContain(mark('note'))
  expect(await page.evaluate(made)).toEqual({ elements: 0, ran: false })
  expect(complaints).toEqual([])
  await context.close()
})
