import { screen, waitFor, within } from '@testing-library/react'
import { beforeEach, expect, test, vi } from 'vitest'
import { sha256 } from '../../server/ledger/crypto.ts'
import { canonicalBytes } from '../../shared/ledger/canonical.ts'
import { signCheckpoint, verifierKey } from '../../shared/ledger/checkpoint.ts'
import { toBase64, toHex } from '../../shared/ledger/hash.ts'
import { leafBytes, leafHash } from '../../shared/ledger/leaf.ts'
import { inclusionParts, proofHashes } from '../../shared/ledger/proof.ts'
import { appendLeaves, rootOf } from '../../shared/ledger/tree.ts'
import { testKey } from '../support/server-crypto.ts'
import * as fixtures from '../support/web-fixtures.ts'
import { open } from '../support/web-render.tsx'
import { fakeServer, json, refusal } from '../support/web-server.ts'

const { key, sign } = testKey()
const index = 5
const size = 11

/** A proof as the server gives it, of a tree in which the record is one of eleven leaves. */
function proofOf(record: ReturnType<typeof fixtures.record>) {
  const { receipt: _, ledger: __, notices: ___, ...body } = record
  const bytes = canonicalBytes(body as never)
  const leaf = leafHash(sha256, leafBytes('record', record.recordedAt, bytes))
  const leaves = Array.from({ length: size }, (_, i) => (i === index ? leaf : sha256(Uint8Array.of(i))))
  const { added, peaks } = appendLeaves(sha256, 0, [], leaves)
  const hashAt = (place: { level: number; index: number }) =>
    added.find((node) => node.level === place.level && node.index === place.index)!.hash
  const checkpoint = { origin: key.name, size, root: rootOf(sha256, peaks) }
  return {
    format: 'ogee.proof/1',
    record: toBase64(bytes),
    leaf: toHex(leaf),
    index,
    path: proofHashes(sha256, inclusionParts(index, size), hashAt).map(toHex),
    checkpoint: signCheckpoint(sha256, checkpoint, key, sign),
  }
}

function serverWith(record: ReturnType<typeof fixtures.record>, role: 'auditor' | 'engineer' = 'auditor') {
  const server = fakeServer({ role })
  server.state.records.set(record.id, record)
  server.on('GET /ledger/proof/:recordId', () => json(proofOf(record)))
  server.on('GET /ledger/key', () => new Response(`${verifierKey(sha256, key)}\n`))
  return server
}
const show = (record: ReturnType<typeof fixtures.record>, server = serverWith(record)) =>
  open(`/records/${record.id}`, server)

beforeEach(() => localStorage.clear())

test('the proof of the record is checked in this browser and drawn from the root to the leaf', async () => {
  const record = fixtures.record(1)
  show(record)
  await screen.findByText('proof checks')
  const path = screen.getByRole('list', { name: 'From the signed root down to the leaf' })
  expect(within(path).getByText(/root of/)).toHaveTextContent('root of 11')
  const { checkpoint, leaf } = proofOf(record)
  const root = toHex(Uint8Array.from(atob(checkpoint.split('\n')[2]!), (c) => c.charCodeAt(0)))
  expect(within(path).getByText(root.slice(0, 16))).toBeVisible()
  expect(within(path).getByText(leaf.slice(0, 16))).toBeVisible()
})

test('a server that shows another record than the ledger has is found out', async () => {
  const record = fixtures.record(1)
  const server = serverWith(record)
  server.state.records.set(record.id, { ...record, lot: '9999' })
  show(record, server)
  expect(await screen.findByText('proof fails')).toBeVisible()
  expect(
    screen.getByText(/The record that the server shows is not the one in the ledger\./),
  ).toHaveTextContent('Do not rely on this record. Tell whoever keeps the ledger.')
})

test.each([
  [
    'a changed path',
    { path: ['00'.repeat(32), '11'.repeat(32), '22'.repeat(32), '33'.repeat(32)] },
    /does not lead to the signed root/,
  ],
  ['a changed leaf', { leaf: 'ab'.repeat(32) }, /not the one that was hashed/],
])('%s fails in words', async (_, change, words) => {
  const record = fixtures.record(1)
  const server = serverWith(record)
  server.on('GET /ledger/proof/:recordId', () => json({ ...proofOf(record), ...change }))
  show(record, server)
  expect(await screen.findByText(words)).toBeVisible()
})

test('the key that was seen first is kept: another one is refused later', async () => {
  const record = fixtures.record(1)
  const { unmount } = show(record)
  await screen.findByText('proof checks')
  unmount()
  const other = testKey()
  const server = serverWith(record)
  const forged = proofOf(record)
  const [origin, count, root] = forged.checkpoint.split('\n')
  const checkpoint = {
    origin: origin!,
    size: Number(count),
    root: Uint8Array.from(atob(root!), (c) => c.charCodeAt(0)),
  }
  server.on('GET /ledger/key', () => new Response(verifierKey(sha256, other.key)))
  server.on('GET /ledger/proof/:recordId', () =>
    json({ ...forged, checkpoint: signCheckpoint(sha256, checkpoint, other.key, other.sign) }),
  )
  show(record, server)
  expect(await screen.findByText(/Signed with another key than the one kept here\./)).toBeVisible()
})

const finding = {
  id: '44444444-4444-4444-8444-444444444444',
  subject: { kind: 'record', record: fixtures.recordId(1), number: 1_004_001, unit: 'DBS-24170-031' },
  text: 'The note gives 30 min warm-up; procedure asks 45.',
  by: { id: 'a', name: 'A. Hale' },
  at: '2026-11-26T09:12:00.000Z',
  leaf: 'cd'.repeat(32),
  state: 'open',
  answers: [],
}

test('an auditor writes a finding on the record or its lot; a lost answer doubles nothing', async () => {
  const record = fixtures.record(1)
  const { user, server } = show({ ...record, lot: '2417' }, serverWith({ ...record, lot: '2417' }))
  await user.click(await screen.findByRole('button', { name: 'Write a finding' }))
  await user.selectOptions(await screen.findByLabelText('About'), 'lot 2417 of DBS-A')
  await user.type(screen.getByLabelText('Words'), 'short')
  await user.click(screen.getByRole('button', { name: 'Keep the finding' }))
  expect(screen.getByLabelText('Words')).toHaveAccessibleDescription(/At least 10 characters; 5 are here\./)
  await user.type(screen.getByLabelText('Words'), ', but longer now')
  server.on('POST /findings', () => Promise.reject(new TypeError('cut')))
  await user.click(screen.getByRole('button', { name: 'Keep the finding' }))
  await screen.findByText('The server does not answer.')
  server.on('POST /findings', () => json(finding, 201))
  server.on('GET /findings', () => json({ items: [finding], next: null }))
  await user.click(screen.getByRole('button', { name: 'Keep the finding' }))
  await waitFor(() => expect(screen.queryByRole('dialog')).toBeNull())
  const [first, second] = server.sent('POST /findings')
  expect(first?.body).toEqual({
    subject: { kind: 'lot', design: 'DBS-A', lot: '2417' },
    text: 'short, but longer now',
  })
  expect(second?.headers.get('idempotency-key')).toBe(first?.headers.get('idempotency-key'))
  await screen.findByText(/procedure asks 45/)
})

test('an engineer answers and finds no way to write or close; a refusal stands in the dialog', async () => {
  const record = fixtures.record(1)
  const server = serverWith(record, 'engineer')
  server.on('GET /findings', () => json({ items: [finding], next: null }))
  server.on('POST /findings/:id/answers', () =>
    refusal('finding-closed', 'The finding was closed by A. Hale.'),
  )
  const { user } = show(record, server)
  await user.click(await screen.findByRole('button', { name: 'Answer' }))
  expect(screen.queryByRole('button', { name: 'Write a finding' })).toBeNull()
  expect(screen.queryByRole('button', { name: 'Close' })).toBeNull()
  await user.type(await screen.findByLabelText('Words'), 'No reading is flagged unsettled.')
  await user.click(screen.getByRole('button', { name: 'Keep the answer' }))
  await screen.findByText('The finding was closed by A. Hale.')
})

test('codes over time are drawn from the trims of the same place, and stand in a table too', async () => {
  const record = fixtures.record(1)
  const server = serverWith(record)
  const line = (n: number, change: object) => ({
    ...fixtures.recordLine(8 * n),
    unit: record.unit,
    ...change,
  })
  server.on('GET /trims', () =>
    json({
      items: [
        line(3, { gainCode: 2587, recordedAt: '2026-11-25T14:00:00.000Z' }),
        line(2, { gainCode: 1, channel: '2' }),
        line(1, { gainCode: 2593, recordedAt: '2025-11-25T14:00:00.000Z' }),
      ],
      next: null,
    }),
  )
  const { user } = show(record, server)
  const plot = await screen.findByRole('figure', { name: 'Codes over time' })
  expect(within(plot).getByRole('img', { name: /2025-11-25 14:00: gain code 2593/ })).toBeVisible()
  expect(within(plot).getAllByRole('img')).toHaveLength(2)
  await user.click(
    within(plot).getByRole('radio', { name: 'table' }).closest('label') ?? within(plot).getByText('table'),
  )
  expect(await within(plot).findByRole('row', { name: /2026-11-25 14:00 .* 2587 2048/ })).toBeVisible()
})

test('the certificate comes as a file by its name; a refusal is said', async () => {
  const record = fixtures.record(1)
  const made: { name: string }[] = []
  vi.stubGlobal(
    'URL',
    Object.assign(URL, { createObjectURL: () => 'blob:x', revokeObjectURL: () => undefined }),
  )
  vi.spyOn(HTMLAnchorElement.prototype, 'click').mockImplementation(function (this: HTMLAnchorElement) {
    made.push({ name: this.download })
  })
  const server = serverWith(record)
  server.on('GET /trims/:id/certificate', () => refusal('not-in-ledger-yet', 'One follows within a second.'))
  const { user } = show(record, server)
  await user.click(await screen.findByRole('button', { name: 'Certificate, PDF' }))
  await screen.findByText('One follows within a second.')
  expect(made).toEqual([])
  server.on('GET /trims/:id/certificate', () => new Response('%PDF-'))
  await user.click(screen.getByRole('button', { name: 'Certificate, PDF' }))
  await waitFor(() =>
    expect(made.map(({ name }) => name)).toEqual([
      `certificate ${record.unit} channel ${record.channel} record ${record.number}.pdf`,
    ]),
  )
})
