import { act, render, screen, within } from '@testing-library/react'
import { userEvent } from '@testing-library/user-event'
import { beforeEach, describe, expect, test, vi } from 'vitest'
import { simulateYield } from '../../../shared/solver/yield/simulate.ts'
import { wilson } from '../../../shared/solver/yield/wilson.ts'
import type { YieldWorker } from '../../../src/features/sizing/use-yield.ts'
import YieldPanel from '../../../src/features/sizing/yield-panel.tsx'
import { yieldServer } from '../../../src/lib/run-yield.ts'
import { onlyBuilt } from '../../../src/lib/worker.ts'
import type { FromYieldWorker } from '../../../src/lib/yield-messages.ts'
import { states, unipolar } from './designs.ts'

/** A worker whose steps a test takes one by one: the protocol of the real one without its thread. */
class SteppedWorker implements YieldWorker {
  static all: SteppedWorker[] = []
  onmessage: YieldWorker['onmessage'] = null
  onerror: YieldWorker['onerror'] = null
  terminate = vi.fn()
  sent: FromYieldWorker[] = []
  private steps: (() => void)[] = []
  private readonly serve = yieldServer(
    (message) => {
      this.sent.push(message)
      this.onmessage?.({ data: message } as MessageEvent<FromYieldWorker>)
    },
    (step) => this.steps.push(step),
  )
  constructor() {
    SteppedWorker.all.push(this)
  }
  postMessage: YieldWorker['postMessage'] = (message) => this.serve(message)
  /** Runs waiting steps, at most so many; true while some wait. */
  run(most = Number.POSITIVE_INFINITY): void {
    act(() => {
      for (let i = 0; i < most && this.steps.length > 0; i++) this.steps.shift()!()
    })
  }
}

beforeEach(() => {
  SteppedWorker.all = []
})

async function startPanel(design = unipolar, trials = '4000') {
  const user = userEvent.setup()
  const shown = render(<YieldPanel design={design} startWorker={() => new SteppedWorker()} />)
  const field = screen.getByRole('textbox', { name: 'trials' })
  await user.clear(field)
  await user.type(field, trials)
  return { user, ...shown }
}
const simulate = () => screen.getByRole('button', { name: 'Simulate' })

describe('panel', () => {
  test('says how far it is, grows, and ends with the solver’s own numbers', async () => {
    const { user } = await startPanel()
    await user.click(simulate())
    const [worker] = SteppedWorker.all
    worker!.run(1)
    expect(screen.getByText(/^Simulating,/)).toHaveTextContent('Simulating, 2000 of 4000.')
    const outline = () => document.querySelector('svg path')!.getAttribute('d')
    const early = outline()
    worker!.run()
    expect(outline()).not.toBe(early)
    expect(screen.queryByText(/^Simulating,/)).toBeNull()
    expect(worker!.terminate).toHaveBeenCalledTimes(1)
    const alone = simulateYield(unipolar, { trials: 4000, seed: 1 })
    expect(worker!.sent.at(-1)).toEqual({ kind: 'done', result: alone })
    const [, first] = within(screen.getByRole('table', { name: 'Yield by pass' })).getAllByRole('row')
    const pass = alone.passes[0]!
    const { low, high } = wilson(Math.round(pass.yield * 4000), 4000)
    expect(first).toHaveTextContent(
      `1${(pass.yield * 100).toFixed(2)} %${(low * 100).toFixed(3)} to ${(high * 100).toFixed(3)} %${(pass.outOfReach * 100).toFixed(2)} %`,
    )
  })

  test('Stop ends it with what is there and says so; the interval is wider', async () => {
    const { user } = await startPanel(unipolar, '100 000')
    await user.click(simulate())
    const [worker] = SteppedWorker.all
    worker!.run(41)
    await user.click(screen.getByRole('button', { name: 'Stop' }))
    worker!.run()
    expect(screen.getByText(/^Stopped at/)).toHaveTextContent(
      'Stopped at 42000. The interval is wider for it.',
    )
    const last = worker!.sent.at(-1)!
    expect(last).toMatchObject({ kind: 'done', result: { trials: 42_000, stopped: true } })
  })

  test('the same seed gives the same table, another seed another one', async () => {
    const { user } = await startPanel()
    const shares = async (seed: string) => {
      const field = screen.getByRole('textbox', { name: 'seed' })
      await user.clear(field)
      await user.type(field, seed)
      await user.click(simulate())
      SteppedWorker.all.at(-1)!.run()
      return screen.getByRole('table', { name: 'Yield by pass' }).textContent
    }
    const first = await shares('7')
    expect(await shares('8')).not.toBe(first)
    expect(await shares('7')).toBe(first)
  })

  test('an answer of the design before the last change says so', async () => {
    const { user, rerender } = await startPanel()
    await user.click(simulate())
    SteppedWorker.all[0]!.run()
    rerender(<YieldPanel design={states.coarse} startWorker={() => new SteppedWorker()} />)
    expect(screen.getByText('Of the design before the last change. Simulate again.')).toBeVisible()
  })

  test('a design that cannot be simulated is refused in a sentence', async () => {
    const { decision: _, ...undecided } = unipolar
    const { user } = await startPanel(undecided)
    await user.click(simulate())
    expect(await screen.findByText(/The design has no decision part/)).toBeVisible()
    expect(SteppedWorker.all[0]!.terminate).toHaveBeenCalled()
  })

  test('seed and trials that are no whole numbers in bounds are said, and nothing starts', async () => {
    await startPanel(unipolar, '10 000 001')
    expect(screen.getByText('Trials takes a whole number from 1 to 10 000 000.')).toBeVisible()
    expect(simulate()).toBeDisabled()
  })

  test('leaving the page ends the worker, and what it still says is not heard', async () => {
    const { user, unmount } = await startPanel()
    await user.click(simulate())
    const [worker] = SteppedWorker.all
    unmount()
    expect(worker!.terminate).toHaveBeenCalled()
    worker!.run()
  })

  test('a worker that breaks off or does not start is said', async () => {
    const { user } = await startPanel()
    await user.click(simulate())
    act(() => SteppedWorker.all[0]!.onerror?.({} as ErrorEvent))
    expect(screen.getByText('The simulation broke off. Start it again.')).toBeVisible()
    expect(simulate()).toBeEnabled()
  })

  test('the histogram is walked by arrows, shown as a table, and has a caption without error bars', async () => {
    const { user } = await startPanel()
    await user.click(simulate())
    SteppedWorker.all[0]!.run()
    expect(screen.getByText(/4000 simulated units, two passes, seed 1\. Each bar 0\.02 LSB\./)).toBeVisible()
    expect(screen.getByText(/No error bars: counts\./)).toBeVisible()
    const bars = screen.getAllByRole('img', { name: /LSB: [\d\u2009]+ units\.$/ })
    bars[0]!.focus()
    await user.keyboard('{ArrowRight}')
    expect(document.activeElement).toHaveAccessibleName(/^0\.02 to 0\.04 LSB: \d+ units\.$/)
    await user.click(screen.getByRole('radio', { name: 'table' }))
    const counted = within(screen.getByRole('table', { name: 'Largest remaining error, as a table' }))
      .getAllByRole('row')
      .slice(1)
      .map((row) => Number(within(row).getAllByRole('cell')[2]!.textContent?.replaceAll('\u2009', '')))
    expect(counted.reduce((sum, count) => sum + count, 0)).toBe(4000)
  })
})

describe('worker', () => {
  test('a run in blocks sends at most 25 pictures, each of more units, and then the end', () => {
    const sent: FromYieldWorker[] = []
    const steps: (() => void)[] = []
    yieldServer(
      (message) => sent.push(message),
      (step) => steps.push(step),
    )({ kind: 'start', design: unipolar, options: { trials: 30_000, seed: 1 } })
    while (steps.length > 0) steps.shift()!()
    const pictures = sent.flatMap((message) => (message.kind === 'progress' ? [message.done] : []))
    expect(pictures.length).toBeGreaterThan(5)
    expect(pictures.length).toBeLessThanOrEqual(25)
    expect([...new Set(pictures)].sort((a, b) => a - b)).toEqual(pictures)
    expect(sent.filter(({ kind }) => kind === 'done').length).toBe(1)
    expect(sent.at(-1)).toMatchObject({ kind: 'done', result: { trials: 30_000, stopped: false } })
  })

  test('the policy lets through the built address and nothing else', async () => {
    const { default: own } = await import('../../../src/lib/yield-worker.ts?worker&url')
    expect(onlyBuilt(own)).toBe(own)
    for (const url of [
      '',
      '/evil.js',
      'https://elsewhere.example/w.js',
      `${own}#`,
      'blob:x',
      'data:text/javascript,1',
    ]) {
      expect(() => onlyBuilt(url)).toThrow(TypeError)
    }
  })
})
