import type { Page } from 'playwright-core'
import { afterAll, beforeAll, describe, expect, test } from 'vitest'
import { axeViolations, openPage as openAny } from '../support/browser.ts'
import { openStage, type Stage } from './stage.ts'

let stage: Stage
beforeAll(async () => {
  // A site with more than one engineer; the demo by itself lets its only one release.
  stage = await openStage({ OGEE_SELF_RELEASE: '0' })
})
afterAll(() => stage.close())

/** A busy machine draws late; these are deadlines and no waits. */
async function openPage(...asked: Parameters<typeof openAny>) {
  const opened = await openAny(...asked)
  opened.page.setDefaultTimeout(90_000)
  return opened
}

/** A second engineer with the first one's password: whoever wrote a revision does not release it. */
async function secondEngineer(): Promise<void> {
  const root = await stage.database.asRoot()
  await root.query(
    `INSERT INTO people (id, email, email_folded, name, role, password_hash, created_at)
     SELECT UUID(), 'runa.oyelaran@example.org', 'runa.oyelaran@example.org', 'Runa Oyelaran', role, password_hash, created_at
     FROM people WHERE email = 'tomas.ellery@example.org'`,
  )
  await root.end()
}

async function signInAsSecond(page: Page): Promise<void> {
  const first = stage.server.accounts().people.find(({ role }) => role === 'engineer')!
  await page.getByLabel('E-mail').fill('runa.oyelaran@example.org')
  await page.getByLabel('Password').fill(first.password)
  await page.keyboard.press('Enter')
  await page.getByRole('navigation').first().waitFor()
}

/** A keyboard that counts: a character is a key, a chord too. */
function counting(page: Page) {
  const keyboard = {
    count: 0,
    type: async (text: string) => {
      keyboard.count += text.length
      await page.keyboard.type(text)
    },
    press: async (...chords: string[]) => {
      for (const chord of chords) {
        keyboard.count += 1
        await page.keyboard.press(chord)
      }
    },
  }
  return keyboard
}

const field = (page: Page, name: string) => page.locator(`[data-field="${name}"]`)

describe('from the template Unipolar', () => {
  test('U4: sized in at most 60 keystrokes, without a mouse', async () => {
    const { page, complaints, context } = await openPage(stage.browser)
    await page.goto(`${stage.server.url}/designs/KEYS-1?template=unipolar`)
    await stage.signIn(page, 'engineer')
    await page.getByText('Enter the resolution and the range.').waitFor()
    await page.waitForFunction(() => document.activeElement?.getAttribute('data-field') === 'bits')
    const keys = counting(page)
    await keys.type('18')
    await keys.press('Tab')
    await keys.type('0 V to 10 V')
    // Leave the field, to the budget, past the name of the line.
    await keys.press('Escape', '3', 'Tab')
    await keys.type('390 ppm')
    await keys.press('Tab', 'Tab', 'Tab', 'Tab', 'Tab')
    await expectFocus(page, /^line\.offset\.\d+\.limit$/)
    await keys.type('30 uV')
    await keys.press('Escape', '4', 'Tab', 'Tab', 'Tab')
    await expectFocus(page, /^target$/)
    await keys.type('0.5 LSB')
    await page.getByText('gain covers').waitFor()
    await page.getByText('offset covers').waitFor()
    expect(await field(page, 'bits').inputValue()).toBe('18')
    expect(await page.locator('[data-field$=".limit"]').first().inputValue()).toBe('390 ppm')
    expect(await field(page, 'target').inputValue()).toBe('0.5 LSB')
    expect(await page.locator('main').textContent()).toMatch(/12 bits hold; \d+ would do\./)
    expect(keys.count).toBeLessThanOrEqual(60)
    expect(complaints).toEqual([])
    await context.close()
  })
})

describe('two people', () => {
  test('one writes a design from a template and sends it to review, the other releases it', async () => {
    await secondEngineer()
    const writer = await openPage(stage.browser, { theme: 'light' })
    await writer.page.goto(`${stage.server.url}/designs`)
    await stage.signIn(writer.page, 'engineer')
    await writer.page.getByRole('button', { name: 'New design' }).click()
    await writer.page.getByLabel('Key').fill('TWO-1')
    await writer.page.getByLabel('Title').fill('Bias source, output T')
    await writer.page.getByLabel(/^Bipolar/).check()
    await writer.page.getByRole('button', { name: 'Start' }).click()
    await field(writer.page, 'bits').fill('16')
    await writer.page.keyboard.press('Tab')
    await writer.page.keyboard.type('-10 V to 10 V')
    await writer.page.getByText('gain covers').waitFor()
    await writer.page.getByText(/revision 1, draft by Tomas Ellery.* saved \d\d:\d\d:\d\d/).waitFor()
    expect(await axeViolations(writer.page)).toEqual([])

    await writer.page.keyboard.press('Control+Enter')
    await writer.page.getByText('You wrote this revision, so someone else releases it.').waitFor()
    expect(await writer.page.getByRole('button', { name: /^Release/ }).count()).toBe(0)
    expect(await field(writer.page, 'bits').count()).toBe(0)

    const reviewer = await openPage(stage.browser, { theme: 'dark' })
    await reviewer.page.goto(`${stage.server.url}/designs/TWO-1`)
    await signInAsSecond(reviewer.page)
    await reviewer.page.getByRole('button', { name: 'Release revision 1' }).click()
    await reviewer.page
      .getByText(/Released by Runa Oyelaran on \d{4}-\d\d-\d\d\. Released revisions do not change\./)
      .waitFor()
    expect(await axeViolations(reviewer.page)).toEqual([])
    await reviewer.page.getByRole('button', { name: 'Start revision 2' }).click()
    await reviewer.page.getByText(/revision 2, draft by Runa Oyelaran/).waitFor()
    await field(reviewer.page, 'target').fill('2 LSB')
    await reviewer.page.getByText(/1 field differs from released 1 · saved/).waitFor()
    await field(reviewer.page, 'target').press('Escape')
    await reviewer.page.keyboard.press('d')
    await reviewer.page.getByRole('cell', { name: '2 LSB' }).waitFor()
    expect(await axeViolations(reviewer.page)).toEqual([])
    expect([...writer.complaints, ...reviewer.complaints]).toEqual([])
    await writer.context.close()
    await reviewer.context.close()
  })

  test('both in one draft: the later one is told, sees the difference, and keeps what was typed', async () => {
    const first = await openPage(stage.browser)
    const second = await openPage(stage.browser)
    await first.page.goto(`${stage.server.url}/designs/TWO-1/revisions/2`)
    await stage.signIn(first.page, 'engineer')
    await second.page.goto(`${stage.server.url}/designs/TWO-1/revisions/2`)
    await signInAsSecond(second.page)
    await field(first.page, 'target').waitFor()
    await field(second.page, 'margin').fill('30 %')
    await second.page.getByText(/saved \d\d:/).waitFor()
    await field(first.page, 'temperatureSpan').fill('25 K')
    await first.page
      .getByText(/Runa Oyelaran saved this draft at .* after you opened it\. Differences: 2 fields\./)
      .waitFor()
    await first.page.getByRole('button', { name: 'Show', exact: true }).click()
    expect(await first.page.getByRole('table', { name: 'Fields that differ' }).textContent()).toMatch(
      /30 %.*25 %/,
    )
    expect(await axeViolations(first.page)).toEqual([])
    await first.page.getByRole('button', { name: 'Keep mine as a new draft' }).click()
    await first.page.getByText(/revision 3, draft by Tomas Ellery/).waitFor()
    expect(await field(first.page, 'temperatureSpan').inputValue()).toBe('25 K')
    expect(await field(first.page, 'margin').inputValue()).toBe('25 %')
    await first.context.close()
    await second.context.close()
  })

  test('an ended session and a killed tab lose nothing typed; who may not write reads', async () => {
    const { page, context } = await openPage(stage.browser)
    await page.goto(`${stage.server.url}/designs/TWO-1/revisions/3`)
    await stage.signIn(page, 'engineer')
    await field(page, 'margin').waitFor()
    await context.clearCookies()
    await field(page, 'margin').fill('35.0 %')
    await page.getByText('Your session has ended. Sign in here; nothing typed is lost.').waitFor()
    const address = page.url()
    await page.close()
    const again = await context.newPage()
    again.setDefaultTimeout(90_000)
    await again.goto(address)
    await stage.signIn(again, 'engineer')
    await field(again, 'margin').waitFor()
    expect(await field(again, 'margin').inputValue()).toBe('35.0 %')
    await again.getByText(/saved \d\d:/).waitFor()
    await context.close()

    const reader = await openPage(stage.browser)
    await reader.page.goto(address)
    await stage.signIn(reader.page, 'auditor')
    await reader.page.getByText('gain covers').waitFor()
    await reader.page.getByText('35 %').first().waitFor()
    expect(await reader.page.locator('[data-field]').count()).toBe(0)
    expect(await reader.page.getByRole('button', { name: 'Send to review' }).count()).toBe(0)
    expect(await axeViolations(reader.page)).toEqual([])
    await reader.context.close()
  })

  test('a link carries what is tried, and nothing of it goes to the server', async () => {
    const { page, context } = await openPage(stage.browser)
    const sent: string[] = []
    page.on('request', (request) => sent.push(request.url()))
    await page.goto(`${stage.server.url}/designs/DBS-A`)
    await stage.signIn(page, 'operator')
    await page
      .getByRole('button', { name: /14 bits/ })
      .first()
      .click()
    await page.getByText('This is tried and not saved.').waitFor()
    const address = page.url()
    expect(address).toMatch(/#try=/)
    const other = await context.newPage()
    other.setDefaultTimeout(90_000)
    await other.goto(address)
    await other.getByText('This is tried and not saved.').waitFor()
    await other.getByText('14 bits').first().waitFor()
    expect(sent.some((url) => url.includes('try='))).toBe(false)
    await other.getByRole('button', { name: 'Drop it' }).click()
    expect(other.url()).not.toMatch(/#/)
    await context.close()
  })
})

async function expectFocus(page: Page, name: RegExp): Promise<void> {
  const focused = await page.evaluate(() => document.activeElement?.getAttribute('data-field'))
  expect(focused).toMatch(name)
}
