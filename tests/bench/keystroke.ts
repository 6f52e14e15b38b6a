import type { Page } from 'playwright-core'
import { launchBrowser } from '../support/browser.ts'
import { builtOrigin, openBuilt } from '../support/built-page.ts'
import { type BenchRow, median } from './row.ts'

/**
 * P7, keystroke to the new answer on the Design page: all panels open, the processor slowed to a quarter by the DevTools
 * protocol. From the key's own time stamp to the frame that carries the answer having been drawn; the page is the built one,
 * its server is answered from fixtures.
 */
const frameMs = 1000 / 60
const slowDown = 4
const keys = 60
export async function benchKeystroke(): Promise<BenchRow[]> {
  const browser = await launchBrowser()
  try {
    const { page } = await openBuilt(browser, '/designs/DBS-A/revisions/2', {
      pages: { '/empty': emptyPage },
    })
    await page.getByText('gain covers').waitFor()
    // All panels open: what waits until it is near is brought near.
    await page.locator('[data-when-near=choices]').scrollIntoViewIfNeeded()
    await page.getByText('Simulated yield').waitFor()
    const session = await page.context().newCDPSession(page)
    await session.send('Emulation.setCPUThrottlingRate', { rate: slowDown })
    const times = await typed(page)
    await page.goto(`${builtOrigin}/empty`)
    const bare = await typed(page)
    return [
      row('keystroke to new answer, median ms at 4x', median(times)),
      row('keystroke to new answer, 95th percentile', worst(times)),
      // No goal: what the browser itself takes on this machine for a key in a page of one field and one sentence.
      { ...row('the same on an empty page, median ms', median(bare)), goal: 'none', met: true },
    ]
  } finally {
    await browser.close()
  }
}

const worst = (times: readonly number[]) => [...times].sort((a, b) => a - b)[Math.floor(times.length * 0.95)]!

function row(name: string, ms: number): BenchRow {
  return {
    id: 'P7',
    name,
    ours: ms.toFixed(1),
    peer: frameMs.toFixed(1),
    ratio: ms / frameMs,
    goal: '<= 1.00',
    met: ms <= frameMs,
  }
}

/** Types into the margin, so that each key changes what is needed; a key that changes no answer is a broken bench. */
async function typed(page: Page): Promise<number[]> {
  const margin = page.locator('[data-field="margin"]')
  await margin.fill('2')
  await page.waitForTimeout(2000)
  await margin.focus()
  await page.keyboard.press('End')
  await page.evaluate(watch)
  const times: number[] = []
  for (let i = 0; i < keys; i++) {
    await page.keyboard.press(i % 2 === 0 ? '5' : 'Backspace')
    times.push(await page.evaluate(() => (globalThis as unknown as Watched).answered))
    await page.waitForTimeout(150)
  }
  return times
}

type Watched = { answered: Promise<number> }

/**
 * In the page: each key promises the time until the frame with another answer has been drawn. A text and no function:
 * what compiles this file puts names of its own into functions.
 */
const watch = `(() => {
  const verdicts = () => document.querySelector('main')?.textContent?.match(/Reach .*? needed/)?.[0]
  document.addEventListener('keydown', (event) => {
    const before = verdicts()
    globalThis.answered = new Promise((resolve, reject) => {
      requestAnimationFrame(() => {
        if (verdicts() === before) reject(new Error('the frame after the key has the old answer'))
        const { port1, port2 } = new MessageChannel()
        // Heard after the frame's style, layout and paint.
        port1.onmessage = () => resolve(performance.now() - event.timeStamp)
        port2.postMessage(null)
      })
    })
  }, { capture: true })
})()`

const emptyPage = `<!doctype html><main><input data-field="margin"><p></p></main><script>
document.querySelector('input').addEventListener('input', ({ target }) => {
  document.querySelector('p').textContent = 'Reach ' + target.value + ' needed'
})</script>`
