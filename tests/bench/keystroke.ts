import type { Page } from 'playwright-core'
import { launchBrowser } from '../support/browser.ts'
import { builtOrigin, openBuilt } from '../support/built-page.ts'
import { type BenchRow, median } from './row.ts'

/**
 * P7, keystroke to the new answer on the Design page: all panels open, the answer in view, the processor slowed to a quarter
 * by the DevTools protocol. From the key's own time stamp to the end of the frame that carries the answer (its style,
 * layout, paint and commit); the page is the built one, its server is answered from fixtures. A key whose next frame has
 * the old answer is a broken bench, so that "the frame" is always the first after the key.
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
    // What is typed for is seen: a part that is out of view is not painted.
    await page.getByText(sentence).first().scrollIntoViewIfNeeded()
    const session = await page.context().newCDPSession(page)
    await session.send('Emulation.setCPUThrottlingRate', { rate: slowDown })
    const times = await typed(page)
    const longest = Number(await page.evaluate('globalThis.longest'))
    await page.goto(`${builtOrigin}/empty`)
    const bare = await typed(page)
    return [
      row('keystroke to new answer, median ms at 4x', median(times)),
      row('keystroke to new answer, 95th percentile', worst(times)),
      // No goal: what a next key may have to wait for, and what the browser itself takes on this machine for a key in a page of one field and one sentence.
      { ...row('longest task of what follows, ms at 4x', longest), goal: 'none', met: true },
      { ...row('the same on an empty page, median ms', median(bare)), goal: 'none', met: true },
      { ...row('the same on an empty page, 95th percentile', worst(bare)), goal: 'none', met: true },
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

const sentence = /^Reach .* needed/

/**
 * In the page: each key promises the time until the frame with another answer has ended. Only the sentence is read, since
 * reading the whole page takes milliseconds that no key takes; and the end is told by a task that goes before the page's
 * own, or it would be told after what the page puts off until then. A text and no function: what compiles this file puts
 * names of its own into functions.
 */
const watch = `(() => {
  globalThis.longest = 0
  new PerformanceObserver((list) => {
    for (const { duration } of list.getEntries()) globalThis.longest = Math.max(globalThis.longest, duration)
  }).observe({ type: 'longtask' })
  const answer = [...document.querySelectorAll('main p')].find((p) => ${sentence}.test(p.textContent))
  document.addEventListener('keydown', (event) => {
    const before = answer.textContent
    globalThis.answered = new Promise((resolve, reject) => {
      requestAnimationFrame(() => {
        if (answer.textContent === before) reject(new Error('the frame after the key has the old answer'))
        scheduler.postTask(() => resolve(performance.now() - event.timeStamp), { priority: 'user-blocking' })
      })
    })
  }, { capture: true })
})()`

const emptyPage = `<!doctype html><main><input data-field="margin"><p>Reach 2 needed</p></main><script>
document.querySelector('input').addEventListener('input', ({ target }) => {
  document.querySelector('p').textContent = 'Reach ' + target.value + ' needed'
})</script>`
