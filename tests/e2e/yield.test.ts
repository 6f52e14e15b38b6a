import { afterAll, beforeAll, expect, test } from 'vitest'
import { openPage } from '../support/browser.ts'
import { openStage, type Stage } from './stage.ts'

let stage: Stage
beforeAll(async () => {
  stage = await openStage()
})
afterAll(() => stage.close())

test('yield is simulated in a worker of the build, under its own content security policy', async () => {
  const { page, complaints, context } = await openPage(stage.browser)
  page.setDefaultTimeout(90_000)
  await page.goto(`${stage.server.url}/designs/DBS-A`)
  await stage.signIn(page, 'engineer')
  await page.locator('[data-when-near=choices]').scrollIntoViewIfNeeded()
  const started = page.waitForEvent('worker')
  await page.getByLabel('trials').fill('20 000')
  await page.getByRole('button', { name: 'Simulate' }).click()
  const worker = await started
  expect(worker.url()).toMatch(/^http:\/\/[^/]+\/assets\/yield-worker-[\w-]+\.js$/)
  const ended = new Promise<void>((resolve) => worker.on('close', () => resolve()))
  await page.getByText('20 000 simulated units, two passes, seed 1.').waitFor()
  await ended
  // No page starts a worker from another address, nor makes a policy of its own.
  const refused = await page.evaluate(() => {
    try {
      return String(new Worker('/theme.js'))
    } catch (error) {
      return (error as Error).name
    }
  })
  expect(refused).toBe('TypeError')
  expect(complaints.filter((text) => !/TrustedScriptURL|trusted type/i.test(text))).toEqual([])
  await context.close()
})
