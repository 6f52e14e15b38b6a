import { readFileSync } from 'node:fs'
import { afterAll, beforeAll, expect, test } from 'vitest'
import { notesIn } from '../../shared/ledger/notes.ts'
import { axeViolations, openPage } from '../support/browser.ts'
import { openStage, type Stage } from './stage.ts'

/** The Ledger page as an auditor uses it, in the build: proofs and the whole ledger are checked in the browser. */

let stage: Stage
beforeAll(async () => {
  stage = await openStage()
})
afterAll(async () => await stage.close())

/** The demo's leaves are all in the ledger, under more than one checkpoint. */
async function settled(): Promise<void> {
  const root = await stage.database.asRoot()
  for (let open = 1; open > 0; ) {
    const [row] = await root.query<{ open: bigint }[]>(
      'SELECT size - checkpoint_size + (SELECT COUNT(*) FROM ledger_pending) AS open FROM ledger_head',
    )
    open = Number(row?.open)
    await new Promise((resolve) => setTimeout(resolve, 200))
  }
  await root.end()
}

test('an auditor keeps a checkpoint, compares two, checks everything, and learns of a changed record', async () => {
  await settled()
  const { page, context, complaints } = await openPage(stage.browser)
  await page.goto(`${stage.server.url}/sign-in`)
  await stage.signIn(page, 'auditor')
  await page.goto(`${stage.server.url}/ledger`)
  const kept = page.getByRole('region', { name: /^Kept in this browser/ })
  await kept.getByRole('button', { name: 'keep' }).click()
  await kept.getByText('proof checks').waitFor()
  expect(await kept.textContent()).toContain('they are the same')

  // Two checkpoints, by keyboard: the smaller is the older, whichever way round.
  const radios = (side: 'older' | 'newer') =>
    page.getByRole('radio', { name: new RegExp(`as the ${side} one`) })
  const count = await radios('older').count()
  expect(count).toBeGreaterThan(1)
  await radios('newer').first().focus()
  await page.keyboard.press('Space')
  await radios('older')
    .nth(count - 2)
    .focus()
  await page.keyboard.press('Space')
  const between = page.getByRole('region', { name: 'Between two checkpoints' })
  await between.getByText('proof checks').waitFor()
  await between.getByRole('img', { name: /is the beginning of the newer one/ }).waitFor()
  expect(await between.getByRole('row').count()).toBeGreaterThan(1)
  expect(page.url()).toMatch(/\?from=\d+&to=\d+|\?to=\d+&from=\d+/)
  await page.reload()
  await between.getByText('proof checks').waitFor()

  const whole = page.getByRole('region', { name: 'Check of the whole' })
  await whole.getByRole('button', { name: 'Check everything' }).click()
  await whole.getByText('everything agrees').waitFor({ timeout: 60_000 })
  expect(await axeViolations(page)).toEqual([])

  const root = await stage.database.asRoot()
  await root.query('DROP TRIGGER records_no_update')
  const [row] = await root.query<{ id: string; number: bigint }[]>(
    "SELECT id, number FROM records WHERE verdict = 'ok' LIMIT 1",
  )
  await root.query("UPDATE records SET verdict = 'suspect' WHERE id = ?", [row!.id])
  await whole.getByRole('button', { name: 'Check everything' }).click()
  await whole.getByText('does not check').waitFor({ timeout: 60_000 })
  const said = await whole.textContent()
  expect(said).toContain(`record ${row!.number}: verdict is stored as suspect, and was hashed as ok`)
  expect(await whole.getByRole('link', { name: 'record' }).getAttribute('href')).toBe(`/records/${row!.id}`)
  expect(await axeViolations(page)).toEqual([])
  await root.query("UPDATE records SET verdict = 'ok' WHERE id = ?", [row!.id])
  await root.end()
  expect(complaints).toEqual([])
  await context.close()
})

test('what is downloaded is what the command line takes; a later ledger that is another contradicts what is kept', async () => {
  const { page, context } = await openPage(stage.browser)
  await page.goto(`${stage.server.url}/sign-in`)
  await stage.signIn(page, 'engineer')
  await page.goto(`${stage.server.url}/ledger`)
  const file = async (button: string) => {
    const [download] = await Promise.all([
      page.waitForEvent('download'),
      page.getByRole('button', { name: button }).click(),
    ])
    return { name: download.suggestedFilename(), text: readFileSync(await download.path(), 'utf8') }
  }
  const newest = await (await fetch(`${stage.server.url}/api/v1/ledger/checkpoint`)).text()
  expect(await file('download checkpoint')).toEqual({ name: 'checkpoint.txt', text: newest })
  const pub = await (await fetch(`${stage.server.url}/api/v1/ledger/key`)).text()
  expect(await file('download ogee.pub')).toEqual({ name: 'ogee.pub', text: pub })
  const all = await file('Download all checkpoints')
  expect(notesIn(all.text).at(-1)).toBe(newest)
  // What this browser kept is of another ledger than the one it meets now.
  await page.evaluate(
    ([key, note]) => {
      const changed = note!.replace(/\n(\d+)\n/, (_, size: string) => `\n${Number(size) - 1}\n`)
      localStorage.setItem(
        'ogee.ledger-kept',
        JSON.stringify({ key, note: changed, since: '2026-01-02T03:04:05.000Z' }),
      )
    },
    [pub.trim(), newest],
  )
  await page.reload()
  const kept = page.getByRole('region', { name: /^Kept in this browser/ })
  await kept.getByText('does not check').waitFor()
  expect(await kept.textContent()).toContain('Tell whoever keeps the ledger.')
  await context.close()
})

test('an operator sees checkpoints and proofs, and no check of the whole; an administrator changes the key', async () => {
  const { page, context } = await openPage(stage.browser)
  await page.goto(`${stage.server.url}/sign-in`)
  await stage.signIn(page, 'operator')
  await page.goto(`${stage.server.url}/ledger`)
  await page.getByRole('region', { name: 'Checkpoints' }).getByRole('row').nth(1).waitFor()
  expect(await page.getByRole('button', { name: 'Check everything' }).count()).toBe(0)
  expect(await page.getByRole('button', { name: 'Change key' }).count()).toBe(0)
  await context.clearCookies()
  await page.goto(`${stage.server.url}/sign-in`)
  await page.getByLabel('E-mail').waitFor()
  await stage.signIn(page, 'administrator')
  await page.goto(`${stage.server.url}/ledger`)
  const kept = page.getByRole('region', { name: /^Kept in this browser/ })
  await kept.getByRole('button', { name: 'keep' }).click()
  await kept.getByText('proof checks').waitFor()
  await page.getByRole('button', { name: 'Change key' }).click()
  await page.getByRole('button', { name: 'Change the key' }).click()
  await page.getByText('Give a reason of at least 10 characters.').waitFor()
  await page.getByLabel('Reason').fill('The old server is sold.')
  await page.getByRole('button', { name: 'Change the key' }).click()
  await page.getByText('Key 2 is in force.').waitFor()
  await settled()
  await page.reload()
  // The old key is the one that is kept, and leads to the new one.
  await kept.getByText('proof checks').waitFor()
  expect(await kept.textContent()).not.toContain('they are the same')
  await context.close()
})
