import { screen, waitFor, within } from '@testing-library/react'
import { expect, test } from 'vitest'
import * as fixtures from '../support/web-fixtures.ts'
import { open } from '../support/web-render.tsx'
import { fakeServer, json, refusal } from '../support/web-server.ts'

const asAdministrator = () => fakeServer({ role: 'administrator' })

test('a token is made with what was chosen, shown once, and is nowhere afterwards', async () => {
  const { user, server, container } = open('/settings/tokens', asAdministrator())
  await user.type(await screen.findByLabelText('Name'), 'line 3 script')
  await user.selectOptions(await screen.findByLabelText('Station'), 'station A')
  await user.clear(screen.getByLabelText('Days'))
  await user.type(screen.getByLabelText('Days'), '30')
  await user.click(await screen.findByRole('checkbox', { name: 'DBS-A' }))
  await user.click(screen.getByRole('button', { name: 'Make the token' }))
  const dialog = await screen.findByRole('dialog')
  expect(within(dialog).getByText(fixtures.tokenText)).toBeVisible()
  expect(server.sent('POST /tokens')[0]?.body).toEqual({
    name: 'line 3 script',
    station: fixtures.stations[0]?.id,
    scopes: ['designs:read', 'trims:write', 'trims:read'],
    days: 30,
    designs: ['DBS-A'],
  })
  await user.click(within(dialog).getByRole('button', { name: 'Copy the token' }))
  expect(await navigator.clipboard.readText()).toBe(fixtures.tokenText)
  await user.click(within(dialog).getByRole('button', { name: 'It is kept' }))
  expect(container).not.toHaveTextContent(fixtures.tokenText)
  expect(JSON.stringify({ ...localStorage })).not.toContain(fixtures.tokenText)
  expect(screen.getByLabelText('Name')).toHaveValue('')
})

test('a token that records needs a station, and days are whole and bounded', async () => {
  const { user, server } = open('/settings/tokens', asAdministrator())
  await user.type(await screen.findByLabelText('Name'), 'x')
  await user.clear(screen.getByLabelText('Days'))
  await user.type(screen.getByLabelText('Days'), '367')
  await user.click(screen.getByRole('button', { name: 'Make the token' }))
  expect(screen.getByLabelText('Station')).toHaveAccessibleDescription('Recording needs a station.')
  expect(screen.getByLabelText('Days')).toHaveAccessibleDescription(/Give whole days, 1 to 366\./)
  expect(server.sent('POST /tokens')).toHaveLength(0)
})

test('only a live token can be revoked, and only after confirming', async () => {
  const server = asAdministrator()
  server.on('DELETE /tokens/:id', () => new Response(null, { status: 204 }))
  const { user } = open('/settings/tokens', server)
  await screen.findByRole('button', { name: 'Revoke line 2 script' })
  expect(screen.queryByRole('button', { name: 'Revoke old script' })).toBeNull()
  await user.click(screen.getByRole('button', { name: 'Revoke line 2 script' }))
  await user.click(screen.getByRole('button', { name: 'Cancel' }))
  expect(server.sent('DELETE /tokens/:id')).toHaveLength(0)
  await user.click(screen.getByRole('button', { name: 'Revoke line 2 script' }))
  await user.click(within(screen.getByRole('dialog')).getByRole('button', { name: 'Revoke line 2 script' }))
  await waitFor(() => expect(server.sent('DELETE /tokens/:id')[0]?.path).toBe('/tokens/aB3dE5gH'))
  await screen.findByText('Token line 2 script is revoked.')
})

test('a station is named, renamed, and retired after confirming', async () => {
  const server = asAdministrator()
  server.on('POST /stations', ({ body }) => json({ ...fixtures.stations[0], name: body?.name }, 201))
  server.on('PATCH /stations/:id', () => json(fixtures.stations[0]))
  const { user } = open('/settings/stations', server)
  await user.type(await screen.findByLabelText('Name of a new station'), 'station C')
  await user.click(screen.getByRole('button', { name: 'Add the station' }))
  await screen.findByText('Station station C is named.')
  expect(server.sent('POST /stations')[0]?.body).toEqual({ name: 'station C' })

  await user.click(screen.getByRole('button', { name: 'Rename station A' }))
  const name = within(screen.getByRole('dialog')).getByLabelText('Name')
  await user.clear(name)
  await user.type(name, 'bay 1{Enter}')
  await waitFor(() => expect(server.sent('PATCH /stations/:id')[0]?.body).toEqual({ name: 'bay 1' }))

  await waitFor(() => expect(screen.queryByRole('dialog')).toBeNull())
  await user.click(screen.getByRole('button', { name: 'Retire station B' }))
  await user.click(within(screen.getByRole('dialog')).getByRole('button', { name: 'Retire station B' }))
  await waitFor(() => expect(server.sent('PATCH /stations/:id')[1]?.body).toEqual({ retired: true }))
  expect(screen.queryByRole('button', { name: 'Retire station old' })).toBeNull()
})

test('a refused name stands at its field and is not lost', async () => {
  const server = asAdministrator()
  server.on('POST /stations', () => refusal('already-exists', 'Station station A exists already.'))
  const { user } = open('/settings/stations', server)
  const field = await screen.findByLabelText('Name of a new station')
  await user.type(field, 'station A ')
  await user.click(screen.getByRole('button', { name: 'Add the station' }))
  expect(field).toHaveAccessibleDescription('Use printable characters with no space at either end.')
  await user.type(field, '{Backspace}{Enter}')
  expect(await screen.findByRole('alert')).toHaveTextContent('Station station A exists already.')
  expect(field).toHaveValue('station A')
})

test.each(['engineer', 'operator', 'auditor'] as const)(
  '%s sees preferences and instruments only, and whom to ask',
  async (role) => {
    const server = fakeServer({ role })
    const { unmount } = open('/settings', server)
    await screen.findByRole('heading', { level: 1, name: 'This browser' })
    const nav = screen.getByRole('navigation', { name: 'Settings' })
    expect(
      within(nav)
        .getAllByRole('link')
        .map((link) => link.textContent),
    ).toEqual(['This browser', 'Instruments'])
    unmount()
    open('/settings/tokens', server)
    await screen.findByText(
      `The role ${role} does not open this page. An administrator can give you the role administrator.`,
    )
    expect(server.sent('GET /tokens')).toHaveLength(0)
  },
)

test('the first administrator signs up with the secret of the address, which leaves it at once', async () => {
  const server = fakeServer({ role: null })
  server.on('GET /setup', () => json({ open: true }))
  server.on('POST /setup', () => {
    server.state.role = 'administrator'
    return json(fixtures.me('administrator'), 201)
  })
  const { user } = open('/setup#one-time-secret', server)
  await user.type(await screen.findByLabelText('Name'), 'S. Brandt')
  expect(window.location.href).not.toContain('one-time-secret')
  await user.type(screen.getByLabelText('E-mail'), 's.brandt@example.org')
  await user.type(screen.getByLabelText('Password'), 'short')
  await user.click(screen.getByRole('button', { name: 'Create the administrator' }))
  expect(screen.getByLabelText('Password')).toHaveAccessibleDescription(
    /At least 12 characters; 5 are here\./,
  )
  await user.type(screen.getByLabelText('Password'), ' and longer')
  await user.click(screen.getByRole('button', { name: 'Create the administrator' }))
  await screen.findByRole('heading', { level: 1, name: 'Records' })
  expect(server.sent('POST /setup')[0]?.body).toEqual({
    secret: 'one-time-secret',
    name: 'S. Brandt',
    email: 's.brandt@example.org',
    password: 'short and longer',
  })
})
