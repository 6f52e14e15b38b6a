import { act, render, screen, waitFor, within } from '@testing-library/react'
import { userEvent } from '@testing-library/user-event'
import { MemoryRouter } from 'react-router-dom'
import { describe, expect, type Mock, test, vi } from 'vitest'
import { sha256 } from '../../server/ledger/crypto.ts'
import type { LedgerReport } from '../../shared/ledger/check/check-ledger.ts'
import { signCheckpoint, verifierKey as verifierKeyOf } from '../../shared/ledger/checkpoint.ts'
import { CheckPanel } from '../../src/features/ledger/check-panel.tsx'
import { proofRows } from '../../src/features/ledger/proof-parts.ts'
import type { LedgerWorker } from '../../src/features/ledger/use-ledger-check.ts'
import { testKey } from '../support/server-crypto.ts'
import { checkpoints, checkpointText, recordId, verifierKey } from '../support/web-fixtures.ts'
import { open } from '../support/web-render.tsx'
import { fakeServer, json, refusal } from '../support/web-server.ts'

test('checkpoints stand in pages, and two chosen in the address', async () => {
  const { user, server } = open('/ledger')
  const older = await screen.findByRole('radio', { name: 'checkpoint 2 as the older one' })
  await user.click(older)
  await user.click(screen.getByRole('radio', { name: 'checkpoint 3 as the newer one' }))
  expect(window.location.search).toBe('?from=1004302&to=1004303')
  expect(server.sent('GET /ledger/checkpoints').some(({ query }) => query.get('size') === '1004302')).toBe(
    true,
  )
  screen.getByRole('main').focus()
  await user.keyboard(']')
  await waitFor(() => expect(window.location.search).toContain('after=2'))
  expect(server.sent('GET /ledger/checkpoints').at(-1)?.query.get('after')).toBe('2')
  await user.keyboard('[[')
  await waitFor(() => expect(window.location.search).not.toContain('after'))
})

test('an address that names a size over which nothing was signed says so', async () => {
  const server = fakeServer()
  server.on('GET /ledger/checkpoints', ({ query }) =>
    json({ items: query.has('size') ? [] : checkpoints, next: null }),
  )
  open('/ledger?from=7&to=1004303', server)
  expect(await screen.findByText(/No checkpoint is over/)).toHaveTextContent(
    'No checkpoint is over 7 entries.',
  )
})

test('what is kept stays with this browser until it is forgotten', async () => {
  localStorage.clear()
  const { user } = open('/ledger')
  const kept = await screen.findByRole('region', { name: /^Kept in this browser/ })
  await within(kept).findByText(/Nothing yet/)
  await user.click(within(kept).getByRole('button', { name: 'keep' }))
  expect(JSON.parse(localStorage.getItem('ogee.ledger-kept')!)).toMatchObject({
    key: verifierKey.trim(),
    note: checkpointText,
  })
  await user.click(within(kept).getByRole('button', { name: 'forget' }))
  expect(localStorage.getItem('ogee.ledger-kept')).toBeNull()
})

describe('a server that was set back', () => {
  const { key, sign } = testKey()
  const noteOver = (size: number) =>
    signCheckpoint(sha256, { origin: key.name, size, root: sha256(Uint8Array.of(size)) }, key, sign)

  async function keptPanel(kept: number, newest: number) {
    const server = fakeServer()
    const keyText = verifierKeyOf(sha256, key)
    server.on('GET /ledger/checkpoint', () => new Response(noteOver(newest)))
    server.on('GET /ledger/key', () => new Response(`${keyText}\n`))
    server.on('GET /ledger/consistency', () =>
      refusal('invalid-request', 'The ledger has no 11 entries to go by; the most here is 5.'),
    )
    const since = '2026-01-02T03:04:05.000Z'
    localStorage.setItem('ogee.ledger-kept', JSON.stringify({ key: keyText, note: noteOver(kept), since }))
    open('/ledger', server)
    const panel = await screen.findByRole('region', { name: /^Kept in this browser/ })
    await within(panel).findByText('does not check')
    localStorage.clear()
    return { panel, server }
  }

  test('shows fewer entries than were kept: a failed check, and whom to tell', async () => {
    const { panel, server } = await keptPanel(11, 5)
    expect(panel).toHaveTextContent(
      'The ledger has 5 entries; 11 were signed before: its end was cut off. Tell whoever keeps the ledger.',
    )
    expect(server.sent('GET /ledger/consistency')).toHaveLength(0)
  })

  test('cannot prove what it signed: a failed check, and whom to tell', async () => {
    const { panel } = await keptPanel(5, 11)
    expect(panel).toHaveTextContent(
      'The ledger has no 11 entries to go by; the most here is 5. Tell whoever keeps the ledger.',
    )
  })
})

test('a list that fails is said where it would stand; the rest of the page is there', async () => {
  const server = fakeServer()
  server.on('GET /ledger/checkpoints', () => refusal('database-unavailable', 'The database does not answer.'))
  open('/ledger', server)
  const list = await screen.findByRole('region', { name: /^Checkpoints/ })
  await within(list).findByText(/The database does not answer/)
  expect(screen.getByRole('region', { name: /^Public key/ })).toBeVisible()
})

test('who may not read the whole ledger is not offered to check it', async () => {
  open('/ledger', fakeServer({ role: 'operator' }))
  await screen.findByRole('radio', { name: 'checkpoint 2 as the older one' })
  expect(screen.queryByRole('button', { name: 'Check everything' })).toBeNull()
  expect(screen.queryByRole('button', { name: 'Change key' })).toBeNull()
})

type FakeWorker = {
  postMessage: Mock
  terminate: Mock
  onmessage: LedgerWorker['onmessage']
  onerror: LedgerWorker['onerror']
}

function panel() {
  const workers: FakeWorker[] = []
  const startWorker = () => {
    const worker: FakeWorker = { postMessage: vi.fn(), terminate: vi.fn(), onmessage: null, onerror: null }
    workers.push(worker)
    return worker
  }
  const kept = { key: 'kept', note: 'note', since: '2026-01-02T03:04:05.000Z' }
  const shown = render(
    <MemoryRouter>
      <CheckPanel kept={kept} verifierKey={verifierKey} startWorker={startWorker} />
    </MemoryRouter>,
  )
  const say = (data: Parameters<NonNullable<LedgerWorker['onmessage']>>[0]['data']) =>
    act(() => workers.at(-1)?.onmessage?.({ data } as MessageEvent))
  return { ...shown, user: userEvent.setup(), workers, say }
}

const report = (change: Partial<LedgerReport> = {}): LedgerReport => ({
  ok: true,
  size: 1_000_000,
  records: 999_000,
  checkpoints: 400,
  kept: 1,
  found: 0,
  faults: [],
  ...change,
})

test('a check is told with what is kept, shows how far it is, and says that all agrees', async () => {
  const { user, workers, say } = panel()
  await user.click(screen.getByRole('button', { name: 'Check everything' }))
  await waitFor(() => expect(workers[0]?.postMessage).toHaveBeenCalled())
  expect(workers[0]!.postMessage.mock.calls[0]![0]).toEqual({
    key: 'kept',
    kept: [{ name: 'the checkpoint that this browser keeps since 2026-01-02', note: 'note' }],
  })
  say({ kind: 'progress', done: 42_000, size: 1_000_000 })
  expect(screen.getByText(/^Checking/)).toHaveTextContent('Checking, 42000 of 1000000 entries.')
  say({ kind: 'done', report: report() })
  expect(screen.getByText(/everything agrees/)).toBeVisible()
  expect(workers[0]!.terminate).toHaveBeenCalled()
})

test('the first disagreement is named and leads to its record', async () => {
  const { user, workers, say } = panel()
  await user.click(screen.getByRole('button', { name: 'Check everything' }))
  await waitFor(() => expect(workers).toHaveLength(1))
  const faults = [
    {
      what: 'row' as const,
      entry: 17,
      to: 17,
      record: recordId(1),
      message: 'Entry 17, record 5: accepted differs.',
    },
    { what: 'stray' as const, entry: null, to: null, record: null, message: 'Leaf 9 has no place.' },
  ]
  say({ kind: 'done', report: report({ ok: false, found: 2, faults }) })
  expect(screen.getByText('does not check')).toBeVisible()
  const [first, second] = screen.getAllByRole('listitem')
  expect(first).toHaveTextContent('Entry 17, record 5: accepted differs.')
  expect(within(first!).getByRole('link')).toHaveAttribute('href', `/records/${recordId(1)}`)
  expect(second).toHaveTextContent('Leaf 9 has no place.')
})

test('a check can be stopped, and one that fails or breaks off can be started again', async () => {
  const { user, workers, say, unmount } = panel()
  const start = () => user.click(screen.getByRole('button', { name: 'Check everything' }))
  await start()
  await user.click(await screen.findByRole('button', { name: 'Stop' }))
  expect(screen.getByText(/^Reads every entry/)).toBeVisible()
  await start()
  await waitFor(() => expect(workers.at(-1)?.postMessage).toHaveBeenCalled())
  say({ kind: 'failed', message: 'The server does not answer.' })
  expect(screen.getByText('The server does not answer.')).toBeVisible()
  await start()
  await waitFor(() => expect(workers.at(-1)?.postMessage).toHaveBeenCalled())
  act(() => workers.at(-1)?.onerror?.(new ErrorEvent('error')))
  expect(screen.getByText('The check broke off. Start it again.')).toBeVisible()
  await start()
  await waitFor(() => expect(workers.at(-1)?.postMessage).toHaveBeenCalled())
  unmount()
  expect(workers.at(-1)!.terminate).toHaveBeenCalled()
})

test('the parts of a proof cover the newer ledger once, whatever the sizes', () => {
  for (let to = 1; to <= 40; to++) {
    for (let from = 1; from <= to; from++) {
      // More hashes than any proof of this size has: only as many as there are parts are taken.
      const rows = proofRows(
        from,
        to,
        Array.from({ length: 20 }, (_, i) => `h${i}`),
      )
      for (const [i, row] of rows.entries()) {
        expect(row.where).toBe(row.last < from ? 'older' : 'newer')
        if (i > 0) expect(row.first).toBe(rows[i - 1]!.last + 1)
      }
      if (rows.length > 0) expect(rows.at(-1)!.last).toBe(to - 1)
    }
  }
})
