import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import { axeViolations, openPage } from '../support/browser.ts'
import { openStage, readings, type Stage } from './stage.ts'

/** U2 at CI size: each screen full, light and dark, 320 and 1440 px wide; no breach of the CSP; nothing wider than the page. */

let stage: Stage
let recordPath = ''
beforeAll(async () => {
  stage = await openStage()
  const response = await fetch(`${stage.server.url}/api/v1/trims?limit=1`, {
    headers: { authorization: `Bearer ${stage.server.accounts().token}` },
  })
  const { items } = (await response.json()) as { items: { id: string }[] }
  recordPath = `/records/${items[0]?.id}`
})
afterAll(() => stage.close())

const looks = (['light', 'dark'] as const).flatMap((theme) => [1440, 320].map((width) => ({ theme, width })))

async function judge(page: import('playwright-core').Page, width: number, path: string): Promise<void> {
  expect(await axeViolations(page), `axe on ${path}`).toEqual([])
  const overflow = await page.evaluate(
    () => document.documentElement.scrollWidth - document.documentElement.clientWidth,
  )
  expect(overflow, `${path} scrolls sideways at ${width} px`).toBeLessThanOrEqual(0)
}

describe.each(looks)('$theme at $width px', ({ theme, width }) => {
  test('sign-in, every screen of an administrator and an engineer', async () => {
    const { page, context, complaints } = await openPage(stage.browser, { theme, width })
    await page.goto(`${stage.server.url}/sign-in`)
    await page.getByLabel('E-mail').waitFor()
    await judge(page, width, '/sign-in')
    await stage.signIn(page, 'administrator')
    for (const path of [
      '/settings',
      '/settings/instruments',
      '/settings/stations',
      '/settings/tokens',
      '/ledger',
      '/nowhere',
    ]) {
      await page.goto(`${stage.server.url}${path}`)
      await page.getByRole('heading', { level: 1 }).waitFor()
      await page.waitForLoadState('networkidle')
      await judge(page, width, path)
    }
    await context.clearCookies()
    await page.goto(`${stage.server.url}/sign-in`)
    await page.getByLabel('E-mail').waitFor()
    await stage.signIn(page, 'engineer')
    for (const path of [
      '/designs',
      '/designs/DBS-A/revisions/1',
      '/lots',
      '/lots/DBS-A/L040',
      '/lots/DBS-A/L028?chart=offset&channel=2&add=1',
      '/history',
      recordPath,
      '/bench?design=DBS-A&channel=1',
    ]) {
      await page.goto(`${stage.server.url}${path}`)
      await page.getByRole('heading', { level: 1 }).waitFor()
      await page.waitForLoadState('networkidle')
      await judge(page, width, path)
    }
    await page.goto(`${stage.server.url}/bench?design=DBS-A&channel=1&unit=SCREEN-1`)
    await page.locator('[data-cell="0-measured"]').click()
    await page.evaluate((text) => navigator.clipboard.writeText(text), readings.join('\n'))
    await page.keyboard.press('Control+V')
    await page.getByText('2593', { exact: true }).first().waitFor()
    await judge(page, width, '/bench, filled')
    expect(complaints).toEqual([])
    await context.close()
  })
})

test('P7: JavaScript of a first load, over the wire, stays under its limits', async () => {
  const { page, context, complaints } = await openPage(stage.browser)
  const session = await context.newCDPSession(page)
  await session.send('Network.enable')
  await session.send('Network.setCacheDisabled', { cacheDisabled: true })
  let bytes = 0
  const headerBytes = new Map<string, number>()
  session.on('Network.responseReceived', ({ requestId, type, response }) => {
    if (type === 'Script') headerBytes.set(requestId, response.encodedDataLength)
  })
  session.on('Network.loadingFinished', ({ requestId, encodedDataLength }) => {
    const head = headerBytes.get(requestId)
    if (head !== undefined) bytes += encodedDataLength - head
  })
  const load = async (path: string) => {
    bytes = 0
    await page.goto(`${stage.server.url}${path}`)
    await page.waitForLoadState('networkidle')
    return bytes / 1000
  }
  expect(await load('/sign-in')).toBeLessThanOrEqual(130)
  await stage.signIn(page, 'engineer')
  // What the first page after sign-in still loads is not counted for the next.
  await load('/nowhere')
  for (const path of [
    '/bench?design=DBS-A',
    '/lots',
    '/lots/DBS-A/L040',
    '/history',
    recordPath,
    '/designs',
    '/designs/DBS-A',
    '/ledger',
  ]) {
    expect(await load(path), path).toBeLessThanOrEqual(185)
  }
  // A page that broke is small too.
  expect(complaints).toEqual([])
  await context.close()
})
