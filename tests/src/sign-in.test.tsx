import { act, screen, waitFor } from '@testing-library/react'
import { expect, test, vi } from 'vitest'
import { setConnection } from '../../src/lib/connection.ts'
import { wanted } from '../../src/screens/sign-in/wanted.ts'
import * as fixtures from '../support/web-fixtures.ts'
import { open } from '../support/web-render.tsx'
import { fakeServer, json, refusal } from '../support/web-server.ts'

async function fillIn(user: ReturnType<typeof open>['user']) {
  await user.type(await screen.findByLabelText('E-mail'), 'engineer@example.org')
  await user.type(screen.getByLabelText('Password'), ' a long pass ')
  await user.click(screen.getByRole('button', { name: 'Sign in' }))
}

test('the wanted page opens after signing in, with its filters', async () => {
  const { user, server } = open('/history?verdict=suspect', fakeServer({ role: null }))
  await fillIn(user)
  await screen.findByRole('link', { name: '1004117' })
  expect(window.location.pathname + window.location.search).toBe('/history?verdict=suspect')
  // Exactly as typed, spaces too; the header proves that the page itself sent it.
  const sent = server.sent('POST /session')[0]
  expect(sent?.body).toEqual({ email: 'engineer@example.org', password: ' a long pass ' })
  expect(sent?.headers.get('x-ogee')).toBe('1')
})

test('a wrong password says so in the same words as an unknown person, and keeps the e-mail', async () => {
  const server = fakeServer({ role: null })
  server.on('POST /session', () => refusal('wrong-password', 'Whatever the server says.'))
  const { user } = open('/sign-in', server)
  await fillIn(user)
  expect(await screen.findByRole('alert')).toHaveTextContent('E-mail or password is wrong.')
  expect(screen.getByLabelText('E-mail')).toHaveValue('engineer@example.org')
  expect(screen.getByLabelText('Password')).toHaveValue('')
})

test('after too many tries it counts down and sends nothing meanwhile', async () => {
  const server = fakeServer({ role: null })
  server.on('POST /session', () => refusal('too-many-requests', 'Too many tries.', { retryAfter: 40 }))
  const { user } = open('/sign-in', server)
  await fillIn(user)
  await screen.findByText(/Again in 40 s\./)
  expect(screen.getByRole('button', { name: 'Sign in' })).toBeDisabled()
  expect(server.sent('POST /session')).toHaveLength(1)
})

test('empty fields are named and nothing is sent', async () => {
  const { user, server } = open('/sign-in', fakeServer({ role: null }))
  await user.click(await screen.findByRole('button', { name: 'Sign in' }))
  expect(screen.getByLabelText('E-mail')).toHaveAccessibleDescription('E-mail is missing.')
  expect(screen.getByLabelText('Password')).toBeInvalid()
  expect(server.sent('POST /session')).toHaveLength(0)
})

test('the public facts of the ledger stand at the foot without signing in', async () => {
  open('/sign-in', fakeServer({ role: null }))
  await screen.findByText('72'.repeat(32))
  expect(screen.getByText(`ed25519 ${'6b'.repeat(32)}`)).toBeVisible()
})

test('an ended session asks over the page; what was typed stays and the same person goes on', async () => {
  const { user, server } = open('/settings/stations', fakeServer({ role: 'administrator' }))
  const field = await screen.findByLabelText('Name of a new station')
  await user.type(field, 'station C')
  server.state.role = null
  server.on('POST /stations', () => refusal('sign-in-required', 'Sign in first.'))
  await user.click(screen.getByRole('button', { name: 'Add the station' }))
  await screen.findByText('Your session has ended. Sign in here; nothing typed is lost.')
  expect(screen.getByLabelText('E-mail')).toHaveValue('administrator@example.org')
  expect(document.activeElement).toBe(screen.getByLabelText('Password'))
  server.on('POST /session', () => {
    server.state.role = 'administrator'
    return json(fixtures.me('administrator'))
  })
  await user.type(screen.getByLabelText('Password'), 'a long pass{Enter}')
  await waitFor(() => expect(screen.queryByText(/Your session has ended/)).toBeNull())
  expect(screen.getByLabelText('Name of a new station')).toHaveValue('station C')
  // Nothing is sent again by itself.
  expect(server.sent('POST /stations')).toHaveLength(1)
})

test('a server that is away is said, tried again, and what had failed is read again', async () => {
  const server = fakeServer()
  server.on('GET /designs', () => Promise.reject(new TypeError('network')))
  const { user } = open('/designs', server)
  await screen.findByText('The server does not answer. What you typed is kept on this computer.')
  server.off('GET /designs')
  await user.click(screen.getByRole('button', { name: 'Try now' }))
  await screen.findByRole('link', { name: 'DBS-A' })
  expect(screen.queryByText(/does not answer/)).toBeNull()
})

test('the banner tries again by itself when its count ends', async () => {
  const server = fakeServer()
  // A page that reads nothing: an answer that comes late would end the outage.
  open('/settings', server)
  await screen.findByRole('heading', { level: 1, name: 'This browser' })
  const before = server.sent('GET /me').length
  vi.useFakeTimers()
  act(() => setConnection({ outage: 'The server does not answer.' }))
  await act(() => vi.advanceTimersByTimeAsync(3000))
  vi.useRealTimers()
  expect(server.sent('GET /me').length).toBeGreaterThan(before)
  await waitFor(() => expect(screen.queryByText(/does not answer/)).toBeNull())
})

test.each([
  ['/history?unit=a', '/history?unit=a'],
  ['//evil.example', '/'],
  ['/\\evil.example', '/'],
  ['https://evil.example', '/'],
  ['/sign-in?to=/x', '/'],
  [null, '/'],
])('after signing in, %s leads to %s', (to, path) => {
  expect(wanted(to)).toBe(path)
})
