import type { Page } from 'playwright-core'
import { afterAll, beforeAll, expect, test } from 'vitest'
import { openPage } from '../support/browser.ts'
import { openStage, readings, type Stage } from './stage.ts'

/** U3 at CI size: by keyboard alone. Targets of 24 px and 400 % zoom (320 px) are judged in screens.test.ts. */

let stage: Stage
beforeAll(async () => {
  stage = await openStage()
})
afterAll(() => stage.close())

type Stop = { name: string; isShown: boolean }

/** Marks everything that Tab should reach: what is there to be used, and is not one of a group that arrows walk. */
const markStops = () => {
  const wanted =
    'a[href], button:not([disabled]), input:not([disabled]), select:not([disabled]), textarea, [tabindex]'
  let count = 0
  for (const element of document.querySelectorAll<HTMLElement>(wanted)) {
    const isRadioOfAGroup =
      element instanceof HTMLInputElement && element.type === 'radio' && !element.checked
    // A closed menu is passed over until it is opened.
    const isHidden = element.closest('[inert], [hidden]') !== null || !element.checkVisibility()
    if (element.tabIndex < 0 || isRadioOfAGroup || isHidden) continue
    element.dataset.u3 = String(count++)
  }
  return count
}

/** Where the focus is, and whether one can see that it is there. */
const whereIsFocus = (): Stop => {
  const element = document.activeElement as HTMLElement
  const { top, bottom, left, right } = element.getBoundingClientRect()
  const { outlineStyle, outlineWidth, boxShadow } = getComputedStyle(element)
  const isMarked = (outlineStyle !== 'none' && outlineWidth !== '0px') || boxShadow !== 'none'
  const isInView = bottom > 0 && top < innerHeight && right > 0 && left < innerWidth
  return {
    name: element.dataset.u3 ?? `${element.tagName} ${element.textContent?.slice(0, 30)}`,
    isShown: isInView && (isMarked || element.querySelector(':focus-visible') !== null),
  }
}

/** Tab reaches every stop of the page, each visibly, and leaves the page again: nobody is caught. */
async function walk(page: Page, path: string): Promise<void> {
  await page.getByRole('heading', { level: 1 }).waitFor()
  await page.waitForLoadState('networkidle')
  const count = await page.evaluate(markStops)
  const reached = new Set<string>()
  const unseen: string[] = []
  // Tab also walks the cells of a grid, each a step and one stop.
  for (let i = 0; i < count + 60 && marked(reached) < count; i += 1) {
    await page.keyboard.press('Tab')
    const { name, isShown } = await page.evaluate(whereIsFocus)
    if (!name.startsWith('BODY') && !isShown) unseen.push(name)
    reached.add(name)
  }
  const missed = await page.evaluate(
    (names) =>
      [...document.querySelectorAll<HTMLElement>('[data-u3]')]
        .filter((element) => !names.includes(element.dataset.u3!))
        .map((element) => element.outerHTML.slice(0, 160)),
    [...reached],
  )
  expect({ path, missed, unseen }).toEqual({ path, missed: [], unseen: [] })
}

const marked = (names: ReadonlySet<string>) => [...names].filter((name) => /^\d+$/.test(name)).length

test('U3: from sign-in to recorded codes without a mouse', async () => {
  const { page, context } = await openPage(stage.browser)
  const engineer = stage.server.accounts().people.find(({ role }) => role === 'engineer')!
  await page.goto(`${stage.server.url}/bench?design=DBS-A&channel=1&unit=U3-1`)
  const tabTo = async (label: string) => {
    const target = page.getByLabel(label, { exact: true })
    await target.waitFor()
    for (let i = 0; i < 60; i += 1) {
      if (await target.evaluate((element) => element === document.activeElement)) return
      await page.keyboard.press('Tab')
    }
    throw new Error(`Tab does not reach ${label}`)
  }
  await tabTo('E-mail')
  await page.keyboard.type(engineer.email)
  await page.keyboard.press('Tab')
  await page.keyboard.type(engineer.password)
  await page.keyboard.press('Enter')
  await page.getByRole('grid').waitFor()
  const cell = page.locator('[data-cell="0-measured"]')
  for (let i = 0; i < 60; i += 1) {
    if (await page.evaluate(() => document.activeElement?.closest('[role="grid"]') != null)) break
    await page.keyboard.press('Tab')
  }
  for (let i = 0; i < 8; i += 1) {
    if (await cell.evaluate((element) => element.contains(document.activeElement))) break
    await page.keyboard.press('ArrowRight')
  }
  for (const reading of readings) {
    await page.keyboard.type(reading)
    await page.keyboard.press('Enter')
  }
  await page.getByText('2593', { exact: true }).first().waitFor()
  await page.keyboard.press('Control+Enter')
  await page
    .getByText(/Recorded as .* at \d\d:\d\d:\d\d/)
    .first()
    .waitFor()
  await context.close()
})

test.each([
  [
    'administrator',
    ['/settings/instruments', '/settings/stations', '/settings/tokens', '/settings', '/ledger'],
  ],
  [
    'engineer',
    [
      '/designs',
      '/designs/DBS-A/revisions/1',
      '/lots',
      '/lots/DBS-A/L038?add=1',
      '/history',
      '/bench?design=DBS-A&channel=1&unit=U3-2',
    ],
  ],
] as const)('U3: Tab reaches everything on the screens of an %s, visibly', async (role, paths) => {
  const { page, context } = await openPage(stage.browser)
  await page.goto(`${stage.server.url}/sign-in`)
  await page.getByLabel('E-mail').waitFor()
  await stage.signIn(page, role)
  for (const path of paths) {
    await page.goto(`${stage.server.url}${path}`)
    await walk(page, path)
  }
  await context.close()
})
