import type { Browser, Page } from 'playwright-core'
import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import { axeViolations, launchBrowser } from '../support/browser.ts'
import { openBuilt, type Reply } from '../support/built-page.ts'

/** U2, U8 and U9 on Design and the list of designs: each state once, with axe; forced colours; on paper. */

let browser: Browser
beforeAll(async () => {
  browser = await launchBrowser()
})
afterAll(() => browser.close())

const draft = '/designs/DBS-A/revisions/2'
const problem = (status: number, code: string, detail: string, facts: object = {}): Reply => ({
  problem: { type: `http://built.test/problems/${code}`, title: code, status, code, detail, facts },
})
const broken = problem(500, 'defect', 'Something broke on the server.')
const shut = problem(403, 'forbidden', 'Your role does not open it.', { administrators: 'S. Brandt' })
const gone = problem(404, 'not-found', 'There is nothing here.')

type State = [name: string, path: string, words: string | RegExp, replies?: Record<string, Reply>]
const states: State[] = [
  [
    'list, empty',
    '/designs',
    'No design yet. Start one from a template.',
    { '/designs': { items: [], next: null } },
  ],
  ['list, loading', '/designs', 'Reading the designs.', { '/designs': 'never' }],
  ['list, full', '/designs', 'Detector bias source, output A'],
  ['list, error', '/designs', 'Something broke on the server.', { '/designs': broken }],
  ['list, forbidden', '/designs', 'An administrator can change your role: S. Brandt.', { '/designs': shut }],
  [
    'design, empty draft',
    '/designs/NEW-1?template=unipolar',
    'Enter the resolution and the range.',
    { '/designs/NEW-1': gone },
  ],
  ['design, loading', draft, 'Reading revision 2.', { '/designs/DBS-A/revisions/2': 'never' }],
  ['design, full', draft, 'gain covers'],
  ['design, released', '/designs/DBS-A/revisions/1', 'Released revisions do not change.'],
  ['design, error', draft, 'Something broke on the server.', { '/designs/DBS-A/revisions/2': broken }],
  [
    'design, forbidden',
    draft,
    'An administrator can change your role: S. Brandt.',
    { '/designs/DBS-A': shut },
  ],
  [
    'design, nothing there',
    '/designs/NONE',
    'There is nothing here, or it is not open to you.',
    { '/designs/NONE': gone },
  ],
  ['design, no such revision', '/designs/DBS-A/revisions/9', 'Design DBS-A has no such revision.'],
]

test.each(states)('%s: the words, and axe clean', async (_, path, words, replies = {}) => {
  const { page, context } = await openBuilt(browser, path, { replies })
  await page.getByText(words).first().waitFor()
  expect(await axeViolations(page)).toEqual([])
  expect(await sideways(page)).toBeLessThanOrEqual(0)
  await context.close()
})

const sideways = (page: Page) =>
  page.evaluate(() => document.documentElement.scrollWidth - document.documentElement.clientWidth)

describe('design, a field in error', () => {
  test.each(['light', 'dark'] as const)('greys the answer and names the field, %s', async (theme) => {
    const { page, context } = await openBuilt(browser, draft, { theme, width: 768 })
    await page.getByText('gain covers').waitFor()
    await page.locator('[data-field="margin"]').fill('30 uV')
    await page.getByText(/Answer for the last good values, .* Margin takes/).waitFor()
    expect(await page.locator('[data-field="margin"]').getAttribute('aria-invalid')).toBe('true')
    expect(await axeViolations(page)).toEqual([])
    await context.close()
  })
})

test('forced colours: verdict shapes, rungs, the cell in use and fields keep their lines', async () => {
  const { page, context } = await openBuilt(browser, draft, { forcedColors: 'active' })
  await page.getByText('gain covers').waitFor()
  await page.waitForLoadState('networkidle')
  expect(await axeViolations(page)).toEqual([])
  const borders = await page
    .locator('[data-field="bits"]')
    .evaluate((field) => getComputedStyle(field).borderTopWidth)
  expect(borders).toBe('1px')
  await page.goto('http://built.test/designs')
  await page.getByText('Detector bias source, output A').waitFor()
  expect(await axeViolations(page)).toEqual([])
  await context.close()
})

test('on paper: light whatever the theme, texts for fields, no controls, nothing wider than the page', async () => {
  const { page, context } = await openBuilt(browser, draft, { theme: 'dark' })
  await page.locator('[data-when-near=choices]').scrollIntoViewIfNeeded()
  await page.getByText('Simulated yield').waitFor()
  await page.emulateMedia({ media: 'print' })
  // A4 less the margins, in CSS pixels.
  await page.setViewportSize({ width: 658, height: 1017 })
  expect(await sideways(page)).toBeLessThanOrEqual(0)
  const ground = await page.evaluate(() => getComputedStyle(document.documentElement).backgroundColor)
  expect(ground).toBe('rgb(255, 255, 255)')
  for (const control of ['add a range', 'add a line', 'Send to review', 'Export', 'Differences']) {
    expect(await page.getByText(control, { exact: true }).first().isVisible(), control).toBe(false)
  }
  expect(await page.getByRole('navigation').first().isVisible()).toBe(false)
  expect(await page.locator('[data-field]:visible').count()).toBe(0)
  for (const text of ['8.66k / 1.5k', 'not stated', 'Resolution × span, gain', 'Root sum square, 95 %']) {
    expect(await page.getByText(text).first().isVisible(), text).toBe(true)
  }
  const pdf = await page.pdf({ format: 'A4' })
  expect(pdf.length).toBeGreaterThan(20_000)
  await context.close()
})
