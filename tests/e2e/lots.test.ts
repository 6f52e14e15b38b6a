import { readFileSync } from 'node:fs'
import type { Download, Page } from 'playwright-core'
import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import { designDocument } from '../../shared/contract/design.ts'
import { simulatedHeader, simulatedRows } from '../../shared/simulate/csv.ts'
import { simulateUnit } from '../../shared/simulate/unit.ts'
import { axeViolations, openPage } from '../support/browser.ts'
import { openStage, type Stage } from './stage.ts'

/** Lots in the built product: from opening by way of a file with mistakes to the signed-off lot. */

let stage: Stage
let csv = ''
beforeAll(async () => {
  stage = await openStage()
  const headers = { authorization: `Bearer ${stage.server.accounts().token}` }
  const reply = await fetch(`${stage.server.url}/api/v1/designs/DBS-A/revisions/1`, { headers })
  const { document } = (await reply.json()) as { document: unknown }
  const design = designDocument.parse(document)
  const measured = [0, 1, 2, 3].flatMap((n) => simulateUnit(design, 5, n))
  // The second unit has another reference, far out; the last row of the third has lost its readings.
  for (const one of measured) {
    if (one.unit !== 'S000002') continue
    for (const point of one.points) point.readings = point.readings.map((volts) => volts * 1.004)
  }
  const rows = measured
    .map((one) => simulatedRows(one))
    .join('')
    .trimEnd()
    .split('\n')
  const last = rows.findLastIndex((row) => row.startsWith('S000003'))
  rows[last] = rows[last]!.replace(/[^,]*$/, '')
  csv = simulatedHeader({ readings: 4 }) + rows.join('\n')
})
afterAll(() => stage.close())

async function fileOf(download: Promise<Download>): Promise<string> {
  return readFileSync(await (await download).path(), 'utf8')
}

/** The table of units is loaded when it is near. */
async function unitsInView(page: Page): Promise<void> {
  await page.locator('[data-when-near="units"]').scrollIntoViewIfNeeded()
}

async function upload(page: Page, text: string, measurements: number): Promise<void> {
  const file = { name: 'points.csv', mimeType: 'text/csv', buffer: Buffer.from(text) }
  await page.locator('[data-upload]').setInputFiles(file)
  await page.getByRole('button', { name: `Record ${measurements} measurement` }).click()
  await page.getByText(/^Upload complete in/).waitFor()
}

describe('a lot', () => {
  test('is opened, filled from a file with mistakes, repaired, decided and signed off', async () => {
    const { page, complaints, context } = await openPage(stage.browser)
    await page.goto(`${stage.server.url}/lots`)
    await stage.signIn(page, 'engineer')
    await page.getByRole('button', { name: 'Open a lot' }).click()
    await page.getByRole('textbox', { name: 'Lot', exact: true }).fill('E2E-1')
    await page.getByLabel('Design', { exact: true }).selectOption('DBS-A')
    await page.getByLabel('Units expected').fill('S000001\nS000002\nS000003\nS000004\nS000099')
    await page.getByText('5 serials understood.').waitFor()
    await page.keyboard.press('Tab')
    await page.getByRole('button', { name: 'Open the lot' }).click()
    await page.getByRole('heading', { level: 1, name: 'E2E-1' }).waitFor()
    await page.getByText('No units yet.').waitFor()

    // "u" adds units; a file with one bad row and one unit out of reach.
    await page.getByRole('main').focus()
    await page.keyboard.press('u')
    await page.locator('[data-upload]').waitFor()
    await upload(page, csv, 15)
    await page.getByText('readings is missing').or(page.getByText('measured is missing')).first().waitFor()
    expect(await axeViolations(page)).toEqual([])
    const repair = page.waitForEvent('download')
    await page.getByRole('button', { name: 'Rows to repair, CSV' }).click()
    const repaired = await fileOf(repair)
    expect(repaired.split('\r\n')[0]).toBe('unit,channel,range,code,readings,x_problem')
    await page.getByText('1 unit out of reach').first().waitFor()
    await page
      .getByRole('cell', { name: /^Gain wants/ })
      .first()
      .waitFor()

    // The same rows with the readings of the whole file again: what was recorded is recognised, nothing doubled.
    const whole = csv.replace(/^(S000003,4,.*),$/m, '$1,9.9979342')
    await upload(page, whole, 16)
    await page.getByText(/15 of them had been recorded before; nothing is doubled/).waitFor()
    await page.getByText('2 of 4 good').or(page.getByText('3 of 4 good')).first().waitFor()
    await page.getByRole('button', { name: 'Close', exact: true }).click()

    await page.getByText('S000099').first().waitFor()
    await page.getByRole('button', { name: 'Sign off lot' }).click()
    const dialog = page.getByRole('dialog')
    await dialog.getByRole('button', { name: 'Sign off' }).click()
    await dialog.getByText('At least 10 characters.').first().waitFor()
    for (const field of await dialog.locator('input').all()) await field.fill('scrapped, reference far out')
    await dialog.getByRole('button', { name: 'Sign off' }).click()
    await page.getByText(/^Signed off by Tomas Ellery/).waitFor()
    expect(await page.getByRole('button', { name: 'Add units' }).count()).toBe(0)
    const codes = page.waitForEvent('download')
    await page.getByRole('button', { name: 'CSV', exact: true }).first().click()
    expect((await fileOf(codes)).split('\r\n').filter((row) => row.startsWith('S000001,'))).toHaveLength(4)
    expect(complaints).toEqual([])
    await context.close()
  })

  test('is live: what a station records meanwhile stands on the page, and nothing jumps', async () => {
    const { page, context } = await openPage(stage.browser)
    await page.goto(`${stage.server.url}/lots/DBS-A/L040`)
    await stage.signIn(page, 'operator')
    await unitsInView(page)
    await page.getByText('96 channels').waitFor()
    await page.getByRole('heading', { name: 'Stations compared' }).waitFor()
    const place = () => page.getByRole('heading', { name: 'Individuals chart' }).boundingBox()
    const before = await place()
    const body = {
      design: 'DBS-A',
      lot: 'L040',
      unit: 'DBS-A-04025',
      channel: '1',
      points: [0, 65536, 131072, 196608, 262143].map((code) => ({ code, measured: (code * 10) / 2 ** 18 })),
    }
    const posted = await fetch(`${stage.server.url}/api/v1/trims`, {
      method: 'POST',
      headers: {
        authorization: `Bearer ${stage.server.accounts().token}`,
        'content-type': 'application/json',
        'idempotency-key': 'e2e-live',
      },
      body: JSON.stringify(body),
    })
    expect(posted.status).toBe(201)
    await page.getByText('97 channels').waitFor({ timeout: 20_000 })
    await page.getByText('22 of 25 good').waitFor()
    const after = await place()
    expect(Math.abs((after?.y ?? 0) - (before?.y ?? 0))).toBeLessThan(60)
    await context.close()
  })

  test('opens by keyboard from the rail, walks what needs attention, and goes to the lot before', async () => {
    const { page, context } = await openPage(stage.browser)
    await page.goto(`${stage.server.url}/history`)
    await stage.signIn(page, 'auditor')
    await page.getByRole('heading', { level: 1 }).waitFor()
    await page.getByRole('main').focus()
    await page.keyboard.press('g')
    await page.keyboard.press('l')
    await page.getByRole('heading', { level: 1, name: 'Lots' }).waitFor()
    expect(await page.getByRole('button', { name: 'Open a lot' }).count()).toBe(0)
    await page.goto(`${stage.server.url}/lots/DBS-A/L028`)
    await page.getByRole('heading', { name: 'Individuals chart' }).waitFor()
    expect(await page.getByRole('button', { name: 'Sign off lot' }).count()).toBe(0)
    await page.getByRole('main').focus()
    await page.keyboard.press('j')
    await page.keyboard.press('j')
    expect(await page.evaluate(() => document.activeElement?.textContent)).toBe('DBS-A-02801 · 2')
    await page.keyboard.press('[')
    await page.getByRole('heading', { level: 1, name: 'L026' }).waitFor()
    await context.close()
  })
})
