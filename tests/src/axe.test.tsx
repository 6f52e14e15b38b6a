import { screen } from '@testing-library/react'
import axe from 'axe-core'
import { expect, test } from 'vitest'
import * as fixtures from '../support/web-fixtures.ts'
import { open } from '../support/web-render.tsx'
import * as results from '../support/web-results.ts'
import { fakeServer, json, refusal } from '../support/web-server.ts'

// One rule measures text on a canvas where there is one.
HTMLCanvasElement.prototype.getContext = () => null

/** Structure only: jsdom draws nothing, so contrast and targets are checked in Chromium. */
async function violations(container: Element) {
  const found = await axe.run(container.ownerDocument, { rules: { 'color-contrast': { enabled: false } } })
  return found.violations.map((one) => `${one.id}: ${one.nodes.map((node) => node.html).join(' | ')}`)
}

const record = fixtures.record(3, {
  result: results.suspectResult,
  verdict: 'suspect',
  accepted: false,
  notices: [{ code: 'newer-record', message: 'Another station was first.', record: fixtures.recordId(1) }],
})
function server() {
  const one = fakeServer({ role: 'administrator' })
  one.state.records.set(record.id, record)
  one.on('GET /trims', () => json({ items: [1, 4, 5].map(fixtures.recordLine), next: null }))
  return one
}

test.each([
  ['/designs', 'Designs'],
  ['/designs/DBS-A', /Detector bias source/],
  ['/history', 'Records'],
  [`/records/${record.id}`, /^Unit DBS-24170-031/],
  ['/ledger', 'Newest checkpoint'],
  ['/settings', 'This browser'],
  ['/settings/instruments', 'Instruments'],
  ['/settings/stations', 'Stations'],
  ['/settings/tokens', 'Tokens'],
  ['/no/such', 'There is no such page'],
])('%s has no violation', async (address, name) => {
  const { container } = open(address, server())
  await screen.findByRole('heading', { level: 1, name })
  await screen.findAllByRole('link')
  expect(await violations(container)).toEqual([])
})

test('sign-in has no violation, also with a refusal on it', async () => {
  const one = fakeServer({ role: null })
  one.on('POST /session', () => refusal('wrong-password', 'E-mail or password is wrong.'))
  const { container, user } = open('/sign-in', one)
  await user.type(await screen.findByLabelText('E-mail'), 'a@example.org')
  await user.type(screen.getByLabelText('Password'), 'wrong{Enter}')
  await screen.findByRole('alert')
  expect(await violations(container)).toEqual([])
})

test('a forbidden page and an outage have no violation', async () => {
  const { container, unmount } = open('/settings/tokens', fakeServer({ role: 'operator' }))
  await screen.findByText(/does not open this page/)
  expect(await violations(container)).toEqual([])
  unmount()
  const away = fakeServer()
  away.on('GET /designs', () => Promise.reject(new TypeError('network')))
  const second = open('/designs', away)
  await screen.findByText('This is read as soon as the server answers.')
  expect(await violations(second.container)).toEqual([])
})
