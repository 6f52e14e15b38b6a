import { fireEvent, screen, waitFor } from '@testing-library/react'
import { expect, test, vi } from 'vitest'
import { readStored } from '../../../src/lib/storage.ts'
import { recordId } from '../../support/web-fixtures.ts'
import { open } from '../../support/web-render.tsx'
import { json, refusal } from '../../support/web-server.ts'
import {
  address,
  benchServer,
  cell,
  column,
  focusCell,
  found,
  gainCode,
  pasteBlock,
  unsettled,
} from './bench-page.ts'

const recordButton = () => screen.findByRole('button', { name: /^Record/ })
const keysOf = (server: ReturnType<typeof benchServer>) =>
  server.sent('POST /trims').map((one) => one.headers.get('idempotency-key'))

test('Ctrl Enter records what is on the page, once, and the ledger is asked until the record has its place', async () => {
  const server = benchServer()
  const { user } = open(`${address}&lot=2417`, server)
  await pasteBlock(found)
  await user.type(screen.getByLabelText('temperature'), '23.4{Enter}')
  await focusCell(0, 'measured')
  await user.keyboard('{Control>}{Enter}{/Control}')
  await screen.findByText(/^Recorded as/)
  await screen.findByText(/In the ledger/)
  expect(screen.getByRole('link', { name: '1004001' })).toHaveAttribute('href', `/records/${recordId(1)}`)
  const [sent] = server.sent('POST /trims')
  expect(sent?.body).toMatchObject({
    kind: 'trim',
    design: 'DBS-A',
    revision: 1,
    unit: 'U-7',
    lot: '2417',
    applied: 'neutral',
    effects: 'design',
    conditions: { temperatureC: 23.4 },
    points: found.map((text, i) => ({ code: [0, 65536, 131072, 196608, 262143][i], measured: Number(text) })),
  })
  expect(keysOf(server)).toHaveLength(1)
  await user.keyboard('{Control>}{Enter}{/Control}')
  expect(server.recorded).toBe(1)
  expect((await screen.findByRole('grid')).getAttribute('aria-readonly')).toBe('true')
})

test('a refusal stands at its cell and at its field, and nothing typed is lost', async () => {
  const server = benchServer()
  const { user } = open(`${address}&lot=none`, server)
  const { status, title } = { status: 422, title: 'Refused' }
  server.on('POST /trims', () =>
    json(
      {
        type: '/problems/invalid-request',
        title,
        status,
        detail: 'Two fields are not right.',
        code: 'invalid-request',
        errors: [
          { path: '/points/3/measured', message: 'Point 4 is not believed.' },
          { path: '/lot', message: 'Lot none is closed.' },
        ],
      },
      status,
    ),
  )
  await pasteBlock(found)
  await user.click(await recordButton())
  const sentence = await screen.findByText('Point 4 is not believed.')
  const at = await cell(3, 'measured')
  expect(at.getAttribute('aria-invalid')).toBe('true')
  expect(at.getAttribute('aria-describedby')).toBe(sentence.closest('[id]')?.id)
  expect(screen.getByLabelText('lot')).toHaveAccessibleDescription('Lot none is closed.')
  expect(await column('measured')).toEqual(found)
  expect(readStored('bench.outbox')).toBeNull()
})

test('a lost answer: the same key goes again by itself, and the record is there once', async () => {
  const server = benchServer()
  const { user } = open(address, server)
  await pasteBlock(found)
  const real = server.fetch
  let lost = 0
  vi.stubGlobal('fetch', async (input: RequestInfo | URL, init?: RequestInit) => {
    const answer = await real(input, init)
    if (init?.method !== 'POST' || lost > 0) return answer
    lost += 1
    throw new TypeError('cut')
  })
  await user.click(await recordButton())
  await screen.findByText(/Saved on this computer at \d\d:\d\d:\d\d\. Not yet sent\./)
  fireEvent(window, new Event('online'))
  await screen.findByText(/^Recorded as/)
  expect(new Set(keysOf(server)).size).toBe(1)
  expect(server.sent('POST /trims')).toHaveLength(2)
  expect(server.recorded).toBe(1)
  expect(readStored('bench.outbox')).toBeNull()
})

test('offline: saved here, survives a reload, sent once when the server answers', async () => {
  const server = benchServer()
  const { user, unmount } = open(address, server)
  await pasteBlock(found)
  server.on('POST /trims', () => {
    throw new TypeError('no network')
  })
  await user.click(await recordButton())
  await screen.findByText(/Saved on this computer/)
  unmount()
  const back = benchServer()
  open(address, back)
  await screen.findByText(/^Recorded as/)
  expect(await column('measured')).toEqual(found)
  expect(back.recorded).toBe(1)
  expect(keysOf(back)).toEqual([server.sent('POST /trims')[0]?.headers.get('idempotency-key')])
  fireEvent(window, new Event('online'))
  expect(back.recorded).toBe(1)
})

test('suspect: an engineer records it with a reason, the override follows the record', async () => {
  const server = benchServer()
  const { user } = open(address, server)
  await pasteBlock(unsettled)
  const button = await screen.findByRole('button', { name: 'Record with override' })
  expect(button).toBeDisabled()
  await user.type(screen.getByLabelText('Reason for recording it all the same'), 'read twice by hand')
  await user.click(button)
  await screen.findByText(/^Recorded as/)
  const [trim, override] = server.sent('POST /trims')
  expect(trim?.body).toMatchObject({ kind: 'trim' })
  expect(override?.body).toMatchObject({
    kind: 'override',
    follows: recordId(1),
    reason: 'read twice by hand',
    unit: 'U-7',
  })
  expect(new Set(keysOf(server)).size).toBe(2)
  expect(screen.queryByText(/Its codes are not accepted/)).toBeNull()
})

test('suspect: an operator is told whom it takes, and may record it marked', async () => {
  const server = benchServer('operator')
  const { user } = open(address, server)
  await pasteBlock(unsettled)
  await screen.findByText(/An engineer can override it with a reason/)
  expect(screen.queryByRole('button', { name: 'Record with override' })).toBeNull()
  await user.click(screen.getByRole('button', { name: /Record as suspect/ }))
  await screen.findByText(/Its codes are not accepted\./)
  expect(server.recorded).toBe(1)
})

test('an override that is refused leaves the trim recorded and says so', async () => {
  const server = benchServer()
  const { user } = open(address, server)
  await pasteBlock(unsettled)
  const own = server.fetch
  vi.stubGlobal('fetch', (input: RequestInfo | URL, init?: RequestInit) =>
    String(init?.body).includes('"override"')
      ? Promise.resolve(refusal('override-not-suspect', 'Only a suspect record can be overridden.'))
      : own(input, init),
  )
  await user.type(await screen.findByLabelText('Reason for recording it all the same'), 'read twice by hand')
  await user.click(screen.getByRole('button', { name: 'Record with override' }))
  await screen.findByText(/The override was not taken: Only a suspect record/)
  expect(screen.getByText(/^Recorded as/)).toBeVisible()
})

test('the second pass: codes loaded, the record followed, effects learned, decisions per point', async () => {
  const server = benchServer()
  const { user } = open(address, server)
  await pasteBlock(found)
  await user.click(await recordButton())
  await screen.findByText(/^Recorded as/)
  await user.click(screen.getAllByRole('button', { name: /Second pass/ })[0] as HTMLElement)
  await screen.findByRole('grid', { name: 'Points as left, pass 2' })
  const params = new URLSearchParams(window.location.search)
  expect(params.get('follows')).toBe(recordId(1))
  expect(params.get('applied')).toBe('gain=2593,offset=2048')
  await pasteBlock(['0.0000010', '2.5000089', '4.9999957', '7.4999972', '9.9999688'])
  await screen.findByText(/Effect taken again from pass 1: slope .* from the design's value, known to ±/)
  expect(await column('decision')).toEqual(['pass', 'pass', 'pass', 'pass', 'conditional pass'])
  await user.click(screen.getByRole('button', { name: /Record pass 2/ }))
  await screen.findByText(/^Recorded as/)
  expect(server.sent('POST /trims')[1]?.body).toMatchObject({
    follows: recordId(1),
    applied: { gain: 2593, offset: 2048 },
    effects: 'learned',
  })
})

test('a killed tab: everything typed is there again, and can be discarded in one undoable step', async () => {
  const { user, unmount } = open(address, benchServer())
  await pasteBlock(found.slice(0, 2))
  await focusCell(2, 'measured')
  await user.keyboard('4.99')
  await waitFor(() => expect(JSON.stringify(localStorage)).toContain('4.99'))
  unmount()
  const again = open(address, benchServer())
  await screen.findByText(/draft kept on this computer/)
  expect(await column('measured')).toEqual([found[0], found[1], '4.99', '', ''])
  await again.user.click(screen.getByRole('button', { name: 'Discard draft' }))
  expect(await column('measured')).toEqual(['', '', '', '', ''])
  await focusCell(0, 'measured')
  await again.user.keyboard('{Control>}z{/Control}')
  expect(await column('measured')).toEqual([found[0], found[1], '4.99', '', ''])
})

test('readings typed before the unit is named go with it; readings of one unit never go to another', async () => {
  const { user } = open('/bench?design=DBS-A', benchServer())
  await pasteBlock(found)
  await user.type(screen.getByLabelText('unit'), 'U-1{Enter}')
  await screen.findByRole('heading', { name: 'Unit U-1, channel 1' })
  expect(await column('measured')).toEqual(found)
  await user.clear(screen.getByLabelText('unit'))
  await user.type(screen.getByLabelText('unit'), 'U-2{Enter}')
  await screen.findByRole('heading', { name: 'Unit U-2, channel 1' })
  expect(await column('measured')).toEqual(['', '', '', '', ''])
  await user.click(screen.getByRole('button', { name: 'Back to U-1' }))
  await screen.findByRole('heading', { name: 'Unit U-1, channel 1' })
  expect(await column('measured')).toEqual(found)
})

test('a unit with codes must say which were applied; the address restores the answer', async () => {
  const server = benchServer()
  const current = {
    channel: '1',
    range: 'u10',
    codes: { gain: 2593, offset: 2048 },
    words: { gain: '0xA21', offset: '0x800' },
    record: recordId(9),
    number: 1_004_009,
    revision: 1,
    recordedAt: '2026-11-25T14:09:40Z',
    lastRecord: recordId(9),
    pass: 1,
  }
  server.on('GET /units', () => json({ items: [{ design: 'DBS-A', serial: 'U-7', current: [current] }] }))
  const { user, unmount } = open(address, server)
  await screen.findByText(/1 pass recorded/)
  await pasteBlock(found)
  await screen.findByText(/This unit has codes already\. Say which codes were applied/)
  expect(screen.queryByRole('status', { name: 'gain code' })).toBeNull()
  await user.selectOptions(screen.getByLabelText('codes applied'), 'current')
  expect(Number((await gainCode()).textContent)).toBeGreaterThan(2593)
  expect(new URLSearchParams(window.location.search).get('applied')).toBe('gain=2593,offset=2048')
  const shown = (await gainCode()).textContent
  const back = window.location.pathname + window.location.search
  unmount()
  open(back, server)
  expect((await gainCode()).textContent).toBe(shown)
  await waitFor(() => expect(screen.getByLabelText('codes applied')).toHaveValue('current'))
})

test('G and O copy the codes, and no key acts while a field has the focus', async () => {
  const { user } = open(address, benchServer())
  const write = vi.spyOn(navigator.clipboard, 'writeText')
  await pasteBlock(found)
  await gainCode()
  screen.getByRole('main').focus()
  await user.keyboard('G')
  await waitFor(() => expect(write).toHaveBeenLastCalledWith('2593'))
  await user.keyboard('O')
  await waitFor(() => expect(write).toHaveBeenLastCalledWith('2048'))
  await user.click(screen.getByRole('button', { name: 'copy hex of the gain code, 0xA21' }))
  expect(write).toHaveBeenLastCalledWith('0xA21')
  await user.click(screen.getByLabelText('note'))
  await user.keyboard('GOt')
  expect(write).toHaveBeenCalledTimes(3)
})
