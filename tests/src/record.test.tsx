import { screen, waitFor, within } from '@testing-library/react'
import userEvent from '@testing-library/user-event'
import { expect, test } from 'vitest'
import * as fixtures from '../support/web-fixtures.ts'
import { open } from '../support/web-render.tsx'
import * as results from '../support/web-results.ts'
import { type FakeServer, fakeServer, json, refusal } from '../support/web-server.ts'

const id = fixtures.recordId
function serverWith(
  records: ReturnType<typeof fixtures.record>[],
  role: 'engineer' | 'operator' = 'engineer',
) {
  const server = fakeServer({ role })
  for (const record of records) server.state.records.set(record.id, record)
  return server
}
const suspect = () =>
  fixtures.record(3, { result: results.suspectResult, verdict: 'suspect', accepted: false })

async function openRecord(n: number, server: FakeServer) {
  const opened = open(`/records/${id(n)}`, server)
  await screen.findByRole('heading', { level: 1, name: /^Unit DBS-24170-031, channel 1/ })
  return opened
}

test('shows codes with their words, the line with its uncertainty, the points and the receipt', async () => {
  await openRecord(1, serverWith([fixtures.record(1)]))
  const codes = screen.getByRole('table', { name: 'Codes' })
  expect(within(codes).getByRole('row', { name: /gain 2593 0xA21/ })).toBeVisible()
  const line = screen.getByRole('table', { name: 'Fitted line' })
  expect(within(line).getByRole('row', { name: /gain error \u2212203\.44 ppm 2\.76 ppm/ })).toBeVisible()
  const points = screen.getByRole('table', { name: 'Points as measured' })
  expect(
    within(points).getByRole('row', { name: /131072 5\.000000 4\.9989783 \u22121021\.7 \u22120\.17/ }),
  ).toBeVisible()
  expect(screen.getByText('9f'.repeat(32))).toBeVisible()
  expect(screen.getByText(/Entry/)).toHaveTextContent('Entry 1004001 of the ledger.')
})

test('the chain leads back through the records that it follows', async () => {
  const chain = [
    fixtures.record(1),
    fixtures.record(2, {
      kind: 'verify',
      result: results.verifyResult,
      verdict: 'conditional-pass',
      follows: id(1),
    }),
    fixtures.record(3, { pass: 2, follows: id(2) }),
  ]
  const { user } = await openRecord(3, serverWith(chain))
  await screen.findByText('3 records; none can be changed or removed')
  await user.click(screen.getByRole('link', { name: 'record 1004002' }))
  expect(await screen.findByText(/Worst \+0\.76 LSB at code/)).toHaveTextContent('at code 262143.')
  expect(window.location.pathname).toBe(`/records/${id(2)}`)
})

test('out of reach gives no code and says what was wanted and what there is', async () => {
  const record = fixtures.record(4, {
    result: results.outOfReachResult,
    verdict: 'out-of-reach',
    ledger: null,
  })
  await openRecord(4, serverWith([record]))
  expect(screen.getByText(/No code is given\. A clipped code is not a trim\./)).toBeVisible()
  expect(screen.getByText(/wants/)).toHaveTextContent(
    'gain wants +410.0 mV at the node; its codes end at +369.0 mV.',
  )
  expect(screen.getByText(/Place in the ledger follows within a minute/)).toBeVisible()
})

test('an engineer overrides a suspect record with a reason; the key stays over a lost answer', async () => {
  const server = serverWith([suspect()])
  const { user } = await openRecord(3, server)
  await user.click(screen.getByRole('button', { name: 'Override' }))
  await user.type(screen.getByLabelText('Reason'), 'too short')
  await user.click(screen.getByRole('button', { name: 'Record the override' }))
  expect(screen.getByLabelText('Reason')).toHaveAccessibleDescription(/At least 10 characters; 9 are here\./)
  expect(server.sent('POST /trims')).toHaveLength(0)

  server.on('POST /trims', () => Promise.reject(new TypeError('cut')))
  await user.type(screen.getByLabelText('Reason'), ', now long enough')
  await user.click(screen.getByRole('button', { name: 'Record the override' }))
  await screen.findByText('The server does not answer.')
  server.on('POST /trims', () => json(fixtures.record(9, { kind: 'override', result: null }), 201))
  await user.click(screen.getByRole('button', { name: 'Record the override' }))
  await waitFor(() => expect(screen.queryByRole('dialog')).toBeNull())

  const [first, second] = server.sent('POST /trims')
  expect(first?.body).toEqual({
    kind: 'override',
    design: 'DBS-A',
    revision: 1,
    unit: 'DBS-24170-031',
    channel: '1',
    range: 'u10',
    follows: id(3),
    reason: 'too short, now long enough',
  })
  expect(first?.headers.get('idempotency-key')).toMatch(/^[0-9a-f-]{36}$/)
  expect(second?.headers.get('idempotency-key')).toBe(first?.headers.get('idempotency-key'))
})

test('a reason survives a closed tab', async () => {
  const server = serverWith([fixtures.record(1)])
  const { user, unmount } = await openRecord(1, server)
  await user.click(screen.getByRole('button', { name: 'Withdraw' }))
  await user.type(screen.getByLabelText('Reason'), 'wrong unit in the fixture')
  window.dispatchEvent(new Event('pagehide'))
  unmount()
  const again = await openRecord(1, server)
  await again.user.click(screen.getByRole('button', { name: 'Withdraw' }))
  expect(screen.getByLabelText('Reason')).toHaveValue('wrong unit in the fixture')
})

test('a refusal of the server stands in the dialog with its sentence', async () => {
  const server = serverWith([fixtures.record(1)])
  server.on('POST /trims', () => refusal('already-withdrawn', 'Record 1004001 was withdrawn before.'))
  const { user } = await openRecord(1, server)
  await user.click(screen.getByRole('button', { name: 'Withdraw' }))
  await user.type(screen.getByLabelText('Reason'), 'wrong unit in the fixture')
  await user.click(screen.getByRole('button', { name: 'Record the withdrawal' }))
  expect(await within(screen.getByRole('dialog')).findByRole('alert')).toHaveTextContent(
    'Record 1004001 was withdrawn before.',
  )
})

test('an operator finds neither act', async () => {
  await openRecord(3, serverWith([suspect()], 'operator'))
  expect(screen.queryByRole('button', { name: 'Override' })).toBeNull()
  expect(screen.queryByRole('button', { name: 'Withdraw' })).toBeNull()
})

test('a result that the solver does not give again is said, with both numbers', async () => {
  const record = fixtures.record(1)
  if (record.result?.format !== 'ogee.codes/1') throw new Error('a trim was expected')
  record.result = {
    ...record.result,
    trim: { ...record.result.trim, codes: { gain: 2592, offset: 2048 } },
  }
  await openRecord(1, serverWith([record]))
  await userEvent.click(await screen.findByRole('button', { name: 'Recompute' }))
  const table = await screen.findByRole('table', { name: 'Recomputed from the stored points' })
  expect(within(table).getByRole('row', { name: /Gain code 2592 2593/ })).toBeVisible()
  expect(screen.getByText('differs')).toBeVisible()
})

test('a missing record and a secret one read the same', async () => {
  open(`/records/${id(77)}`, fakeServer())
  await screen.findByText('There is nothing here, or it is not open to you.')
})
