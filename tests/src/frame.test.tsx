import { screen, waitFor, within } from '@testing-library/react'
import { expect, test, vi } from 'vitest'
import { leave } from '../../src/lib/leave.ts'
import { open } from '../support/web-render.tsx'
import { fakeServer } from '../support/web-server.ts'

const focusPage = () => screen.getByRole('main').focus()
const heading = (name: string) => screen.findByRole('heading', { level: 1, name })
const atLedger = () => heading('Newest checkpoint')

test('g and a letter go to the places', async () => {
  const { user } = open('/ledger')
  await atLedger()
  focusPage()
  await user.keyboard('gd')
  await screen.findByRole('heading', { level: 1, name: 'Designs' })
  focusPage()
  await user.keyboard('gs')
  await screen.findByRole('heading', { level: 1, name: 'This browser' })
  focusPage()
  await user.keyboard('gg')
  await atLedger()
})

test('keys do nothing while the focus is in the rail', async () => {
  const { user } = open('/ledger')
  await atLedger()
  screen.getByRole('link', { name: 'Bench' }).focus()
  await user.keyboard('gd')
  expect(window.location.pathname).toBe('/ledger')
})

test('single-letter keys can be turned off and on again', async () => {
  const { user } = open('/settings')
  await user.click(await screen.findByRole('checkbox', { name: /Single-letter keys/ }))
  focusPage()
  await user.keyboard('gd?')
  expect(window.location.pathname).toBe('/settings')
  expect(screen.queryByRole('dialog')).toBeNull()
  await user.click(screen.getByRole('checkbox', { name: /Single-letter keys/ }))
  focusPage()
  await user.keyboard('gd')
  await screen.findByRole('heading', { level: 1, name: 'Designs' })
})

test('? lists the keys of the page', async () => {
  const { user } = open('/history')
  await screen.findByRole('link', { name: '1004120' })
  focusPage()
  await user.keyboard('?')
  const dialog = await screen.findByRole('dialog', { name: 'Keys of this page' })
  expect(within(dialog).getByText('older records')).toBeVisible()
  expect(within(dialog).getByText('to Designs')).toBeVisible()
  await user.click(within(dialog).getByRole('button', { name: 'Close' }))
  expect(screen.queryByRole('dialog')).toBeNull()
})

test('the theme is applied at once and kept', async () => {
  const { user, unmount, server } = open('/settings')
  await heading('This browser')
  await user.click(within(screen.getByRole('main')).getByRole('radio', { name: 'dark' }))
  expect(document.documentElement.dataset.theme).toBe('dark')
  expect(localStorage.getItem('ogee.theme')).toBe('"dark"')
  unmount()
  open('/settings', server)
  await heading('This browser')
  expect(within(screen.getByRole('main')).getByRole('radio', { name: 'dark' })).toBeChecked()
  await user.click(within(screen.getByRole('main')).getByRole('radio', { name: 'as the system' }))
  expect(document.documentElement.dataset.theme).toBeUndefined()
})

test('the rail says where one is and who is signed in', async () => {
  open('/designs', fakeServer({ role: 'auditor' }))
  await screen.findByRole('link', { name: 'DBS-A' })
  expect(screen.getByRole('link', { name: /Designs/, current: 'page' })).toBeVisible()
  expect(screen.getAllByText('A. Hale').length).toBeGreaterThan(0)
  expect(screen.getAllByText('auditor').length).toBeGreaterThan(0)
})

test('signing out ends the session at the server', async () => {
  const left = vi.spyOn(leave, 'to').mockImplementation(() => undefined)
  const { user, server } = open('/ledger')
  await atLedger()
  await user.click(screen.getByText('engineer', { selector: 'summary span' }))
  await user.click(screen.getByRole('button', { name: 'Sign out' }))
  await waitFor(() => expect(left).toHaveBeenCalledWith('/sign-in'))
  expect(server.sent('DELETE /session')).toHaveLength(1)
})

test('an address without a page says so', async () => {
  open('/no/such')
  await screen.findByRole('heading', { level: 1, name: 'There is no such page' })
  expect(screen.getByText('/no/such')).toBeVisible()
})

test('the start is Bench for whoever records, and History for whoever reads', async () => {
  open('/', fakeServer({ role: 'auditor' }))
  await screen.findByRole('heading', { level: 1, name: 'Records' })
  expect(window.location.pathname).toBe('/history')
})
