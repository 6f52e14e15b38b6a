import { execFile } from 'node:child_process'
import { join } from 'node:path'
import { promisify } from 'node:util'
import type { Page } from 'playwright-core'
import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import { openPage } from '../support/browser.ts'
import { openStage, readings, type Stage } from './stage.ts'

const run = promisify(execFile)
const cli = join(import.meta.dirname, '../../dist/cli/ogee.mjs')
const points =
  'code,measured\n0,1.3e-6\n65536,2.4994998\n131072,4.9989783\n196608,7.4984718\n262143,9.9979342\n'

/** The same codes read again once the trim is loaded, all within tolerance. */
const left = ['0.0000010', '2.5000089', '4.9999957', '7.4999972', '9.9999688']

let stage: Stage
beforeAll(async () => {
  stage = await openStage()
})
afterAll(() => stage.close())

describe('from measured points to recorded codes', () => {
  test('an engineer signs in, pastes five readings, records, and finds the record with its place in the ledger', async () => {
    const { page, complaints, context } = await openPage(stage.browser)
    // The page that was wanted comes back after sign-in.
    await page.goto(`${stage.server.url}/bench?design=DBS-A&channel=1`)
    await stage.signIn(page, 'engineer')
    await page.getByRole('grid').waitFor()

    await page.getByLabel('unit', { exact: true }).fill('E2E-0001')
    await page.keyboard.press('Enter')
    await page.evaluate((text) => navigator.clipboard.writeText(text), readings.join('\r\n'))
    await page.keyboard.press('Control+V')
    await page.getByText('2593', { exact: true }).first().waitFor()
    await page.getByText('2048', { exact: true }).first().waitFor()
    await page.getByText('0xA21', { exact: true }).first().waitFor()
    await page.getByText('Loading codes moves a live output.').first().waitFor()

    await page.keyboard.press('Control+Enter')
    const said = page.getByText(/Recorded as .* at \d\d:\d\d:\d\d/).first()
    await said.waitFor()
    await page
      .getByText(/In the ledger since \d\d:\d\d:\d\d/)
      .first()
      .waitFor({ timeout: 20_000 })
    expect(new URL(page.url()).searchParams.get('unit')).toBe('E2E-0001')

    // The codes are loaded and the same codes read again, with the bench's own meter: as left.
    await page
      .getByRole('button', { name: /Second pass/ })
      .first()
      .click()
    await page.getByRole('grid', { name: 'Points as left, pass 2' }).waitFor()
    await page.getByLabel('instrument').selectOption('DMM-07')
    await page.locator('[data-cell="0-measured"]').click()
    await page.evaluate((text) => navigator.clipboard.writeText(text), left.join('\r\n'))
    await page.keyboard.press('Control+V')
    await page.getByText(/Probability of conforming/).waitFor()
    await page.keyboard.press('Control+Enter')
    await page.getByText(/^Recorded as left, as/).waitFor()

    await page.goto(`${stage.server.url}/history?unit=E2E-0001`)
    await page.getByRole('link', { name: /\d/ }).filter({ hasText: /\d/ }).first().waitFor()
    await page.locator('tbody tr').first().getByRole('link').first().click()
    await page.getByRole('heading', { name: /E2E-0001/ }).waitFor()
    await page.getByText(/DMM-07, Reference voltmeter/).waitFor()

    await page.goto(`${stage.server.url}/history?unit=E2E-0001`)
    await page.getByRole('link', { name: /\d/ }).filter({ hasText: /\d/ }).first().waitFor()
    await page.locator('tbody tr').last().getByRole('link').first().click()
    await page.getByRole('heading', { name: /E2E-0001/ }).waitFor()
    expect(await page.locator('main').textContent()).toMatch(/2593/)
    expect(complaints).toEqual([])
    await context.close()
  })

  test('a shell script with a token gets the same codes, and both records are in History', async () => {
    const child = run(
      process.execPath,
      [
        cli,
        'trim',
        '--design',
        'DBS-A',
        '--unit',
        'E2E-0002',
        '--channel',
        '1',
        '--applied',
        'neutral',
        '--points',
        '-',
        '--format',
        'json',
      ],
      {
        env: {
          PATH: process.env.PATH ?? '',
          HOME: stage.server.dataDir,
          OGEE_URL: stage.server.url,
          OGEE_TOKEN: stage.server.accounts().token,
        },
      },
    )
    child.child.stdin?.end(points)
    const { stdout } = await child
    const record = JSON.parse(stdout) as {
      unit: string
      result: { trim: { codes: unknown }; fit: { expandedUncertainty: { gainPpm: number } } }
    }
    expect(record.result.trim.codes).toEqual({ gain: 2593, offset: 2048 })
    expect(record.result.fit.expandedUncertainty.gainPpm).toBeGreaterThan(0)

    const { page, context } = await openPage(stage.browser)
    await page.goto(`${stage.server.url}/history`)
    await stage.signIn(page, 'auditor')
    await page.getByText('E2E-0001').first().waitFor()
    await page.getByText('E2E-0002').first().waitFor()
    await context.close()
  })

  test('a killed tab loses nothing typed, and an ended session keeps it too', async () => {
    const { page, context } = await openPage(stage.browser)
    await page.goto(`${stage.server.url}/bench?design=DBS-A&channel=2&unit=E2E-0003`)
    await stage.signIn(page, 'operator')
    await page.getByRole('grid').waitFor()
    await page.locator('[data-cell="0-measured"]').click()
    await page.keyboard.type('1.10 uV')
    await page.keyboard.press('Enter')
    // At most a second of typing may be lost (U7).
    await page.waitForTimeout(1200)
    const address = page.url()
    await page.close()
    const again = await context.newPage()
    await again.goto(address)
    await expectCell(again, '0-measured', /1\.10 uV/)
    await context.clearCookies()
    await again.getByRole('link', { name: /History/ }).click()
    await again.getByText('Your session has ended. Sign in here; nothing typed is lost.').waitFor()
    await context.close()
  })
})

async function expectCell(page: import('playwright-core').Page, place: string, text: RegExp): Promise<void> {
  const cell = page.locator(`[data-cell="${place}"]`)
  await cell.waitFor()
  expect(await cell.textContent()).toMatch(text)
}

/** Tab until the focus is there, as a person without a mouse goes; a stop that never comes is a fault of the page. */
async function tabTo(page: Page, words: RegExp): Promise<void> {
  const said: string[] = []
  for (let i = 0; i < 120; i++) {
    const name = await page.evaluate(() => {
      const at = document.activeElement
      if (!(at instanceof HTMLElement)) return ''
      const labels =
        at instanceof HTMLInputElement ? [...(at.labels ?? [])].map((one) => one.textContent) : []
      return [at.getAttribute('aria-label') ?? '', ...labels, at.textContent].join(' ').trim()
    })
    if (words.test(name)) return
    said.push(name)
    await page.keyboard.press('Tab')
  }
  throw new Error(`no Tab leads to ${words}: ${said.join(' | ')}`)
}

test("U3: the README's design by keyboard alone: from a template to released by its author, with what the demo has", async () => {
  const { page, complaints, context } = await openPage(stage.browser)
  page.setDefaultTimeout(90_000)
  await page.goto(`${stage.server.url}/designs`)
  await stage.signIn(page, 'engineer')
  await page.getByRole('button', { name: 'New design' }).waitFor()
  await tabTo(page, /^New design$/)
  await page.keyboard.press('Enter')
  await page.getByLabel('Key').waitFor()
  await tabTo(page, /^Key/)
  await page.keyboard.type('README-1')
  await page.keyboard.press('Tab')
  await page.keyboard.type('Bias source')
  await tabTo(page, /^Unipolar/)
  await page.keyboard.press('Space')
  await page.keyboard.press('Enter')
  await page.waitForFunction(() => document.activeElement?.getAttribute('data-field') === 'bits')
  await page.keyboard.type('18')
  await page.keyboard.press('Tab')
  await page.keyboard.type('0 V to 10 V')
  await page.getByText('gain covers').waitFor()
  // A number explains itself, and a cell of the table is tried and dropped.
  await page.keyboard.press('Escape')
  await tabTo(page, /^7\.\d+ mV|^\d+(\.\d+)? mV$/)
  await page.keyboard.press('Enter')
  await page.getByRole('dialog', { name: /^How reach of gain/ }).waitFor()
  await page.keyboard.press('Escape')
  await tabTo(page, /12 bits, .*covers/)
  await page.keyboard.press('ArrowDown')
  await page.keyboard.press('Enter')
  await page.getByText('This is tried and not saved.').waitFor()
  await page.locator('h1').focus()
  await tabTo(page, /^Drop it$/)
  await page.keyboard.press('Enter')
  await page.getByText('This is tried and not saved.').waitFor({ state: 'detached' })
  await page.getByText(/saved \d\d:\d\d:\d\d/).waitFor()
  await page.keyboard.press('Control+Enter')
  await page.getByText('You wrote this revision. It will say: released by its author.').waitFor()
  await page.locator('h1').focus()
  await tabTo(page, /^Release revision 1$/)
  await page.keyboard.press('Enter')
  await page.getByText(/^Released by .*, by its author\. Released revisions do not change\.$/).waitFor()
  expect(complaints).toEqual([])
  await context.close()
})
