import type { Page } from 'playwright-core'
import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import { openPage } from '../support/browser.ts'
import { openStage, type Stage } from './stage.ts'

/** History as one list: what only a browser that lays out, scrolls and moves the focus can show. */

let stage: Stage
beforeAll(async () => {
  stage = await openStage()
})
afterAll(() => stage.close())

async function openHistory(width: number, height = 900) {
  const opened = await openPage(stage.browser, { width, height })
  await opened.page.goto(`${stage.server.url}/history`)
  await stage.signIn(opened.page, 'auditor')
  await opened.page.locator('[data-row="10"]').waitFor()
  return opened
}

const look = (page: Page) =>
  page.evaluate(() => {
    const rows = [...document.querySelectorAll<HTMLElement>('main tbody tr, main ul > li')]
    const drawn = rows.filter((row) => row.querySelector('[data-row]') !== null)
    return {
      place: scrollY,
      drawn: drawn.length,
      heights: [...new Set(drawn.map((row) => row.getBoundingClientRect().height))],
      sideways: document.documentElement.scrollWidth - innerWidth,
      text: document.querySelector('nav[aria-label="Pages"] span')?.textContent ?? '',
    }
  })

/** How far the row at the top is from the one that the history entry holds. */
const rowsFromKept = () => {
  const head = document.querySelector('thead')?.getBoundingClientRect().bottom ?? 0
  const seen = [...document.querySelectorAll<HTMLElement>('main [data-row]')].find(
    (row) => (row.closest('tr')?.getBoundingClientRect().bottom ?? 0) > head + 1,
  )
  return Number(seen?.dataset.row) - (history.state?.usr?.top ?? Number.NaN)
}

/** The focused row, and whether anything lies over it. */
const focusedRow = (page: Page) =>
  page.evaluate(() => {
    const element = document.activeElement as HTMLElement
    const { left, top, bottom, height } = element.getBoundingClientRect()
    const seen = [top + 2, bottom - 2].map((y) =>
      element.contains(document.elementFromPoint(left + Math.min(10, height), y)),
    )
    return { row: Number(element.dataset.row), isClear: seen.every(Boolean) }
  })

describe.each([
  [1440, 25],
  [768, 25],
  [390, 49],
])('%i px', (width, rowPx) => {
  test('the wheel reads on to records that were on no page yet, in rows of one height', async () => {
    const { page, context, complaints } = await openHistory(width)
    const asked = new Set<string>()
    page.on('request', (request) => {
      const after = new URL(request.url()).searchParams.get('after')
      if (after !== null) asked.add(after)
    })
    await page.mouse.move(width / 2, 450)
    for (let i = 0; i < 40 && asked.size < 5; i += 1) {
      await page.mouse.wheel(0, 1200)
      await page.waitForTimeout(50)
    }
    expect(asked.size).toBeGreaterThanOrEqual(5)
    await page.waitForLoadState('networkidle')
    const seen = await look(page)
    expect(seen.drawn).toBeGreaterThan(10)
    expect(seen.drawn).toBeLessThan(80)
    expect(seen).toMatchObject({ heights: [rowPx], sideways: 0 })
    await expect.poll(() => new URL(page.url()).searchParams.has('after')).toBe(true)
    expect(complaints).toEqual([])
    await context.close()
  })
})

test('reload and the way back find the very row', async () => {
  const { page, context } = await openHistory(1440)
  await page.mouse.move(700, 450)
  for (let i = 0; i < 6; i += 1) {
    await page.mouse.wheel(0, 900)
    await page.waitForTimeout(200)
  }
  // However slowly the wheel's last turn arrives: until the row kept is the row seen.
  await expect.poll(() => page.evaluate(rowsFromKept), { timeout: 10_000 }).toBe(0)
  const before = await look(page)
  expect(before.place).toBeGreaterThan(2000)
  await page.reload()
  await expect.poll(async () => (await look(page)).text).toBe(before.text)
  await page.locator('[data-row]').nth(20).click()
  await page.waitForURL(/\/records\//)
  await page.goBack()
  await expect.poll(async () => Math.abs((await look(page)).place - before.place)).toBeLessThan(26)
  await context.close()
})

test('by keyboard: the pages come before the rows, j walks past what was read, and nothing lies over the row', async () => {
  const { page, context } = await openHistory(1440)
  await page.getByRole('button', { name: /^Older/ }).focus()
  await page.keyboard.press('Tab')
  expect(await focusedRow(page)).toEqual({ row: 0, isClear: true })
  for (let i = 0; i < 70; i += 1) {
    await page.keyboard.press('j')
    if (i % 10 === 9) await page.waitForTimeout(100)
  }
  await expect.poll(() => focusedRow(page)).toEqual({ row: 70, isClear: true })
  for (let i = 0; i < 50; i += 1) await page.keyboard.press('k')
  await expect.poll(() => focusedRow(page)).toEqual({ row: 20, isClear: true })
  // Scrolled far away, the row still has the focus.
  await page.mouse.move(700, 450)
  await page.mouse.wheel(0, 4000)
  await page.waitForTimeout(300)
  expect((await focusedRow(page)).row).toBe(20)
  await page.keyboard.press('Enter')
  await page.waitForURL(/\/records\//)
  await context.close()
})
