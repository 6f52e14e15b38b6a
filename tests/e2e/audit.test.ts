import { execFile } from 'node:child_process'
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { promisify } from 'node:util'
import Papa from 'papaparse'
import type { Download, Page } from 'playwright-core'
import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import { axeViolations, openPage } from '../support/browser.ts'
import { filesInPdf } from '../support/pdf-files.ts'
import { openStage, type Stage } from './stage.ts'

/** An auditor, years later: from a filter to a record, its proof, a finding on it, and its certificate on paper. */

const run = promisify(execFile)
const cli = join(import.meta.dirname, '../../dist/cli/ogee.mjs')
let stage: Stage
let folder: string
beforeAll(async () => {
  stage = await openStage()
  folder = mkdtempSync(join(tmpdir(), 'ogee-audit-'))
})
afterAll(async () => {
  await stage.close()
  rmSync(folder, { recursive: true, force: true })
})

async function bytesOf(download: Promise<Download>): Promise<{ name: string; bytes: Buffer }> {
  const done = await download
  return { name: done.suggestedFilename(), bytes: readFileSync(await done.path()) }
}

async function judge(page: Page, about: string): Promise<void> {
  expect(await axeViolations(page), about).toEqual([])
  const overflow = await page.evaluate(
    () => document.documentElement.scrollWidth - document.documentElement.clientWidth,
  )
  expect(overflow, `${about} scrolls sideways`).toBeLessThanOrEqual(0)
}

/** Runs the built command line in an empty folder, without a server. */
async function checkOffline(proof: string, key: string): Promise<string> {
  writeFileSync(join(folder, 'proof.json'), proof)
  writeFileSync(join(folder, 'ogee.pub'), key)
  const given = ['proof', 'check', 'proof.json', '--key', 'ogee.pub', '--format', 'json']
  const { stdout } = await run(process.execPath, [cli, ...given], {
    cwd: folder,
    env: { PATH: process.env.PATH ?? '', HOME: folder },
  })
  return stdout
}

describe('an auditor', () => {
  test('filters by keyboard, exports, opens a record, sees its proof check, writes a finding, prints the certificate', async () => {
    const { page, complaints, context } = await openPage(stage.browser)
    await page.goto(`${stage.server.url}/history`)
    await stage.signIn(page, 'auditor')
    await page.getByText(/ match · newest first/).waitFor()

    await page.getByRole('main').focus()
    await page.keyboard.press('/')
    await page.keyboard.type('DBS-A')
    await page.keyboard.press('Enter')
    await page.getByLabel('kind').selectOption('verify')
    await page.getByLabel('verdict').selectOption('pass')
    await page.waitForURL(/serial=DBS-A&kind=verify&verdict=pass/)
    await page.getByText(/ match · newest first/).waitFor()
    const counted = async () =>
      Number(/([\d\s]+) match/.exec((await state.textContent()) ?? '')?.[1]?.replaceAll(/\s/g, ''))
    const state = page.getByText(/ match · newest first/)
    await page.getByRole('main').focus()
    await page.keyboard.press('e')
    const exported = bytesOf(page.waitForEvent('download'))
    await page.getByRole('button', { name: /^CSV/ }).click()
    const { name, bytes } = await exported
    expect(name).toMatch(/^ogee records \d{4}-\d\d-\d\d\.csv$/)
    await page.getByText(/handed to the browser/).waitFor()
    const { data } = Papa.parse<Record<string, string>>(bytes.toString(), {
      header: true,
      skipEmptyLines: true,
    })
    expect(data.length).toBeGreaterThan(10)
    expect(data.length).toBe(await counted())
    for (const row of data)
      expect([row.unit?.startsWith('DBS-A'), row.kind, row.verdict]).toEqual([true, 'verify', 'pass'])
    await page.keyboard.press('Escape')

    await page.getByRole('main').focus()
    await page.keyboard.press('j')
    await page.keyboard.press('Enter')
    await page.getByRole('heading', { name: /^Unit DBS-A/ }).waitFor()
    await page.getByText('proof checks').waitFor()
    await page.getByRole('button', { name: 'Recompute' }).click()
    await page.getByText('same result').waitFor()

    await page.getByRole('button', { name: 'Write a finding' }).click()
    await page.getByLabel('Words').waitFor()
    await page.keyboard.type('The note gives 30 min of warm-up; the procedure asks 45.')
    await judge(page, 'the dialog of a finding')
    await page.getByRole('button', { name: 'Keep the finding' }).click()
    await page.getByText(/the procedure asks 45/).waitFor()
    await page.getByText(/A finding of .* on it is open/).waitFor()

    const printed = bytesOf(page.waitForEvent('download'))
    await page.getByRole('button', { name: 'Certificate, PDF' }).click()
    const certificate = await printed
    expect(certificate.name).toMatch(/^certificate DBS-A-\d+ channel \d record \d+\.pdf$/)
    const [proof = ''] = filesInPdf(certificate.bytes)
    const key = await (await fetch(`${stage.server.url}/api/v1/ledger/key`)).text()
    expect(await checkOffline(proof, key)).toContain(`"${page.url().split('/').at(-1)}"`)

    await page.goto(`${stage.server.url}/history?finding=open`)
    await page.getByText('1 match', { exact: false }).first().waitFor()
    await page.getByText('finding', { exact: true }).nth(1).waitFor()
    expect(complaints).toEqual([])
    await context.close()
  })

  test('is answered by an engineer and closes; the record then says nothing of it', async () => {
    const { page, context, complaints } = await openPage(stage.browser)
    await page.goto(`${stage.server.url}/history?finding=open`)
    await stage.signIn(page, 'engineer')
    await page.locator('tbody tr').first().getByRole('link').first().click()
    await page.getByRole('button', { name: 'Answer' }).click()
    await page.getByLabel('Words').fill('No reading is flagged unsettled.')
    await page.getByRole('button', { name: 'Keep the answer' }).click()
    await page.getByText(/Answered, open\./).waitFor()
    const address = page.url()
    await context.clearCookies()
    await page.goto(address)
    await page.getByLabel('E-mail').waitFor()
    await stage.signIn(page, 'auditor')
    await page.getByRole('button', { name: 'Close', exact: true }).click()
    await page.getByLabel('Words').fill('Accepted; the procedure is changed.')
    await page.getByRole('button', { name: 'Close the finding' }).click()
    await page.getByText('0 open').waitFor()
    // The head asks for itself, a moment later.
    await page.getByText(/on it is open/).waitFor({ state: 'detached' })
    expect(complaints).toEqual([])
    await context.close()
  })

  test('writes one on a lot, which stands on the lot and on each of its records', async () => {
    const { page, context, complaints } = await openPage(stage.browser)
    const headers = { authorization: `Bearer ${stage.server.accounts().token}` }
    const reply = await fetch(`${stage.server.url}/api/v1/trims?limit=1&kind=trim`, { headers })
    const [line] = ((await reply.json()) as { items: { id: string; design: string; lot: string }[] }).items
    await page.goto(`${stage.server.url}/lots/${line!.design}/${line!.lot}`)
    await stage.signIn(page, 'auditor')
    await page.locator('[data-when-near="findings"]').scrollIntoViewIfNeeded()
    await page.getByRole('button', { name: 'Write a finding' }).click()
    await page.getByLabel('Words').fill('Two meters were used in one lot.')
    await page.getByRole('button', { name: 'Keep the finding' }).click()
    await page.getByText(/Two meters were used in one lot\./).waitFor()
    await judge(page, 'the lot with a finding')
    await page.goto(`${stage.server.url}/records/${line!.id}`)
    await page.getByText(/Two meters were used in one lot\. On lot/).waitFor()
    expect(complaints).toEqual([])
    await context.close()
  })
})

const looks = (['light', 'dark'] as const).flatMap((theme) => [1440, 320].map((width) => ({ theme, width })))
test.each(looks)('its pages in $theme at $width px', async ({ theme, width }) => {
  const { page, context, complaints } = await openPage(stage.browser, { theme, width })
  await page.goto(`${stage.server.url}/history?finding=any`)
  await stage.signIn(page, 'auditor')
  await page.getByText(/match/).first().waitFor()
  await judge(page, 'History')
  await page.getByRole('button', { name: 'Export' }).click()
  await page.getByRole('button', { name: /^CSV/ }).waitFor()
  await judge(page, 'the export')
  await page.keyboard.press('Escape')
  await page.locator('main [data-row="0"]').click()
  await page.getByText('proof checks').waitFor()
  await page.getByText(/the procedure asks 45/).waitFor()
  await judge(page, 'the record')
  expect(complaints).toEqual([])
  await context.close()
})
