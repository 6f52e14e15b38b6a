import { act, render, screen, waitFor, within } from '@testing-library/react'
import { userEvent } from '@testing-library/user-event'
import { useState } from 'react'
import { expect, type Mock, test, vi } from 'vitest'
import { sizeDesign } from '../../../shared/solver/sizing/size.ts'
import type { Network } from '../../../shared/solver/types.ts'
import {
  findResistors,
  type ResistorSettings,
  usualSettings,
} from '../../../src/features/sizing/resistor-request.ts'
import { ResistorTable } from '../../../src/features/sizing/resistor-table.tsx'
import {
  type NetworkWorker,
  type StartNetworkWorker,
  useResistors,
} from '../../../src/features/sizing/use-resistors.ts'
import { findNetwork } from '../../../src/lib/find-network.ts'
import type { FromNetworkWorker } from '../../../src/lib/network-messages.ts'
import { unipolar, withGain } from './designs.ts'

const size = sizeDesign(unipolar)
const outputPerV = size.adjusters.gain!.outputPerV

function Page({
  onUse,
  start = usualSettings,
}: {
  onUse?: (network: Network) => void
  start?: ResistorSettings
}) {
  const [settings, setSettings] = useState(start)
  const answer = findResistors(unipolar, size, 'gain', settings)!
  return (
    <ResistorTable
      answer={answer}
      outputPerV={outputPerV}
      settings={settings}
      onSettings={setSettings}
      onUse={onUse}
    />
  )
}
const rows = () => within(screen.getByRole('table')).getAllByRole('row').slice(1)

test('first what the form holds, then candidates that cover, every digit of a value kept', () => {
  render(<Page onUse={() => undefined} />)
  expect(rows()[0]).toHaveTextContent('now8.6601.500±367.0±366.4+0.333.731.28246')
  const answer = findResistors(unipolar, size, 'gain', usualSettings)!
  const candidates = 'result' in answer ? answer.result.candidates : []
  expect(rows().length).toBe(1 + candidates.length)
  for (const [i, { network }] of candidates.entries()) {
    if (network.kind !== 'divider') throw new Error('not a divider')
    const cells = within(rows()[i + 1]!).getAllByRole('cell')
    expect(Number(cells[1]!.textContent) * 1e3).toBeCloseTo(network.topOhm, 6)
    expect(Number(cells[2]!.textContent) * 1e3).toBeCloseTo(network.bottomOhm, 6)
  }
  expect(screen.getByText(/need ±293 mV at the node/)).toBeInTheDocument()
})

test('use hands over the network', async () => {
  const user = userEvent.setup()
  const onUse = vi.fn()
  render(<Page onUse={onUse} />)
  await user.click(screen.getAllByRole('button', { name: /^use R top/ })[1]!)
  const answer = findResistors(unipolar, size, 'gain', usualSettings)!
  expect(onUse).toHaveBeenCalledWith('result' in answer && answer.result.candidates[1]!.network)
})

test('series, tolerance and limits are typed as quantities; what cannot be read is said and changes nothing', async () => {
  const user = userEvent.setup()
  render(<Page onUse={() => undefined} />)
  const before = rows().map((row) => row.textContent)
  const source = screen.getByRole('textbox', { name: 'source under' })
  await user.clear(source)
  expect(source).toHaveValue('')
  await user.type(source, '1 kohm')
  const limited = rows().map((row) => row.textContent)
  expect(limited).not.toEqual(before)
  await user.clear(source)
  await user.type(source, '1 V')
  expect(screen.getByText(/source under takes ohm, kohm or Mohm/i)).toBeVisible()
  await user.selectOptions(screen.getByRole('combobox', { name: 'series' }), 'E24')
  expect(rows().map((row) => row.textContent)).not.toEqual(limited)
})

test('where nothing meets the request the nearest stands with what is in the way', () => {
  render(<Page onUse={() => undefined} start={{ ...usualSettings, maxSourceOhm: 5 }} />)
  expect(screen.getByText(/^No E96 values cover the span with source resistance at most 5 ohm/)).toBeVisible()
  expect(rows().length).toBe(2)
  expect(rows()[1]).toHaveTextContent(/^use nearest/)
})

test('a request that makes no sense is refused in a sentence, without a table', () => {
  render(<Page start={{ ...usualSettings, tolerance: 0.6 }} />)
  expect(screen.getByText(/A resistor tolerance of 0\.6 is not at least 0 and under 0\.5/)).toBeVisible()
  expect(screen.queryByRole('table')).toBeNull()
})

test('a design without the adjuster has no resistors to find', () => {
  const alone = { ...unipolar, adjusters: { offset: unipolar.adjusters.offset } }
  expect(findResistors(alone, sizeDesign(alone), 'gain', usualSettings)).toBeNull()
})

const shifted: Network = { kind: 'shifted', topOhm: 10_000, shiftOhm: 20_000, shiftV: 2.5 }
const shiftedDesign = withGain({ lowV: 0, highV: 2.5 }, shifted)
const shiftedSize = sizeDesign(shiftedDesign)

function Shifted({ startWorker, settings }: { startWorker: StartNetworkWorker; settings: ResistorSettings }) {
  const answer = useResistors(shiftedDesign, shiftedSize, 'gain', settings, startWorker)
  if (answer === null) return <p>looking</p>
  return <p>{'result' in answer ? JSON.stringify(answer.result) : answer.refusal}</p>
}

test('three resistors are looked for in a worker, once typing rests; what is overtaken is ended', async () => {
  const workers: { postMessage: Mock; terminate: Mock; onmessage: NetworkWorker['onmessage'] }[] = []
  const startWorker = () => {
    const worker = { postMessage: vi.fn(), terminate: vi.fn(), onmessage: null }
    workers.push(worker)
    return worker
  }
  const { rerender } = render(<Shifted startWorker={startWorker} settings={usualSettings} />)
  const other = { ...usualSettings, series: 'E24' } as const
  rerender(<Shifted startWorker={startWorker} settings={other} />)
  expect(screen.getByText('looking')).toBeVisible()
  await waitFor(() => expect(workers.length).toBe(1))
  const [question] = workers[0]!.postMessage.mock.calls[0]!
  expect(question).toMatchObject({ which: 'gain', request: { series: 'E24' } })
  const answer = findResistors(shiftedDesign, shiftedSize, 'gain', other)
  act(() => workers[0]!.onmessage?.({ data: findNetwork(question) } as MessageEvent<FromNetworkWorker>))
  expect(screen.getByText(JSON.stringify(answer && 'result' in answer && answer.result))).toBeVisible()
  expect(workers[0]!.terminate).toHaveBeenCalled()
  // Another question: the answer stays until the next is there, and leaving ends the worker.
  rerender(<Shifted startWorker={startWorker} settings={usualSettings} />)
  expect(screen.queryByText('looking')).toBeNull()
  await waitFor(() => expect(workers.length).toBe(2))
  rerender(<p>left</p>)
  expect(workers[1]!.terminate).toHaveBeenCalled()
})
