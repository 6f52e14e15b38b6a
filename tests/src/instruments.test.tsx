import { screen, waitFor, within } from '@testing-library/react'
import { expect, test } from 'vitest'
import * as fixtures from '../support/web-fixtures.ts'
import { open } from '../support/web-render.tsx'
import { fakeServer, json, refusal } from '../support/web-server.ts'

const path = '/settings/instruments'
const asAdministrator = () => fakeServer({ role: 'administrator' })
const row = (id: string) => screen.getByRole('row', { name: new RegExp(`^${id}`) })

test('each is listed with limits and days, and a state that is shape and word', async () => {
  open(path, fakeServer({ role: 'auditor' }))
  await screen.findByRole('heading', { level: 1, name: 'Instruments' })
  await screen.findByText('DMM-07')
  expect(row('DMM-07')).toHaveTextContent(`4${'1 µV'}${fixtures.day(-165)}${fixtures.day(200)}in use`)
  expect(row('DMM-08')).toHaveTextContent('2.5 µV')
  expect(within(row('DMM-08')).getByText('overdue')).toBeVisible()
  expect(within(row('DMM-12')).getByText('due soon')).toBeVisible()
  expect(row('DMM-02')).toHaveTextContent('retired 2026-01-09')
  // Who does not keep them has no acts, and reads the rule.
  expect(screen.queryByRole('button', { name: /Change|Retire|Add/ })).toBeNull()
  expect(screen.getByText('An overdue instrument records nothing.')).toBeVisible()
})

test('an administrator adds one; what is wrong stands at its field, in the words of the quantity', async () => {
  const server = asAdministrator()
  server.on('POST /instruments', ({ body }) => json({ ...fixtures.instruments[0], ...body }, 201))
  const { user } = open(path, server)
  await user.type(await screen.findByLabelText('Short name'), 'DMM 13')
  await user.type(screen.getByLabelText('Gain limit'), '30 uV')
  await user.type(screen.getByLabelText('Calibrated on'), '2.3.2026')
  await user.click(screen.getByRole('button', { name: 'Add the instrument' }))
  expect(screen.getByLabelText('Short name')).toHaveAccessibleDescription(
    /Use letters, digits, dot, dash or underscore\./,
  )
  expect(screen.getByLabelText('Gain limit')).toHaveAccessibleDescription(
    /Gain limit takes ppm or %\. 30 uV is a voltage\./,
  )
  expect(screen.getByLabelText('Calibrated on')).toHaveAccessibleDescription(/Write the day as 2026-11-01\./)
  expect(screen.getByLabelText('Serial')).toHaveAccessibleDescription(/Serial is missing\./)
  expect(server.sent('POST /instruments')).toHaveLength(0)

  const type = async (label: string, text: string) => {
    await user.clear(screen.getByLabelText(label))
    await user.type(screen.getByLabelText(label), text)
  }
  await type('Short name', 'DMM-13')
  await type('What it is', 'Bench meter')
  await type('Serial', 'QX-1')
  await type('Gain limit', '0.0003 %')
  await type('Offset limit', '2 uV')
  await type('Calibrated on', '2026-03-02')
  await type('Due on', '2026-03-01')
  await user.click(screen.getByRole('button', { name: 'Add the instrument' }))
  expect(screen.getByLabelText('Due on')).toHaveAccessibleDescription(/Due lies before the calibration\./)
  await type('Due on', '2027-03-02')
  await user.click(screen.getByRole('button', { name: 'Add the instrument' }))
  await screen.findByText('Instrument DMM-13 is added.')
  expect(server.sent('POST /instruments')[0]?.body).toEqual({
    id: 'DMM-13',
    title: 'Bench meter',
    serial: 'QX-1',
    gainPpm: 3,
    offsetV: 2e-6,
    calibratedOn: '2026-03-02',
    dueOn: '2027-03-02',
  })
  expect(screen.getByLabelText('Short name')).toHaveValue('')
})

test('a change goes with what was seen, and what somebody else did is told and not lost', async () => {
  const server = asAdministrator()
  server.on('PATCH /instruments/:id', () =>
    refusal('precondition-failed', 'S. Brandt changed instrument DMM-07 at 14:07, after you opened it.'),
  )
  const { user } = open(path, server)
  await user.click(await screen.findByRole('button', { name: 'Change DMM-07' }))
  const dialog = screen.getByRole('dialog')
  expect(within(dialog).getByLabelText('Offset limit')).toHaveValue('1 µV')
  await user.clear(within(dialog).getByLabelText('Due on'))
  await user.type(within(dialog).getByLabelText('Due on'), '2199-01-02{Enter}')
  expect(await within(dialog).findByRole('alert')).toHaveTextContent('S. Brandt changed instrument DMM-07')
  expect(within(dialog).getByLabelText('Due on')).toHaveValue('2199-01-02')
  const [sent] = server.sent('PATCH /instruments/:id')
  expect(sent?.headers.get('if-match')).toBe('"3"')
  // Typed values come back to the same doubles; the short name is no change.
  expect(sent?.body).toEqual({
    serial: 'QX-DMM-07',
    title: 'Reference voltmeter, 8½ digits',
    gainPpm: 4,
    offsetV: 1e-6,
    calibratedOn: fixtures.day(-165),
    dueOn: '2199-01-02',
  })
})

test('retiring asks first; the rule is set with one click', async () => {
  const server = asAdministrator()
  server.on('PATCH /instruments/:id', () => json(fixtures.instruments[3]))
  server.on('PUT /instrument-rule', ({ body }) => json(body))
  const { user } = open(path, server)
  await user.click(await screen.findByRole('button', { name: 'Retire DMM-08' }))
  expect(server.sent('PATCH /instruments/:id')).toHaveLength(0)
  await user.click(within(screen.getByRole('dialog')).getByRole('button', { name: 'Retire DMM-08' }))
  await screen.findByText('DMM-08 is retired.')
  expect(server.sent('PATCH /instruments/:id')[0]).toMatchObject({
    path: '/instruments/DMM-08',
    body: { retired: true },
  })
  expect(screen.queryByRole('button', { name: 'Retire DMM-02' })).toBeNull()
  await user.click(screen.getByRole('checkbox', { name: 'An overdue instrument may record' }))
  await waitFor(() => expect(server.sent('PUT /instrument-rule')[0]?.body).toEqual({ overdueAllowed: true }))
})

test('an empty list says what holds until one is named', async () => {
  const server = asAdministrator()
  server.on('GET /instruments', () => json({ items: [], overdueAllowed: false }))
  open(path, server)
  await screen.findByText(/^No instrument yet\./)
})
