import { screen, waitFor, within } from '@testing-library/react'
import { expect, test } from 'vitest'
import { recordId, recordLine } from '../support/web-fixtures.ts'
import { open } from '../support/web-render.tsx'
import { fakeServer, json, refusal } from '../support/web-server.ts'

const link = (n: number) => screen.findByRole('link', { name: String(1_004_000 + n) })
const focusPage = () => screen.getByRole('main').focus()

test('older and newer walk the pages, and the address restores each', async () => {
  const { user, server, unmount } = open('/history')
  await link(120)
  focusPage()
  await user.keyboard(']')
  await link(70)
  expect(window.location.search).toBe('?after=1004071')
  await user.keyboard(']')
  await link(20)
  expect(screen.queryByRole('button', { name: /Older/ })).toBeNull()
  await user.keyboard('[[')
  await link(70)
  const address = window.location.pathname + window.location.search
  unmount()
  open(address, server)
  await link(70)
  expect(screen.queryByRole('link', { name: '1004120' })).toBeNull()
})

test('filters stand in the address and are asked of the server; the page starts again', async () => {
  const { user, server } = open('/history?after=1004071')
  await link(70)
  await user.selectOptions(screen.getByLabelText('verdict'), 'suspect')
  await waitFor(() => expect(window.location.search).toBe('?verdict=suspect'))
  await link(117)
  expect(server.sent('GET /trims').at(-1)?.query.toString()).toContain('verdict=suspect')
  await user.type(screen.getByLabelText('unit'), 'none such{Enter}')
  await screen.findByText(/No record matches\. Unit none such has none/)
  expect(window.location.search).toBe('?verdict=suspect&unit=none+such')
  await user.click(screen.getByRole('button', { name: 'clear 2 filters' }))
  await link(120)
  expect(window.location.search).toBe('')
})

test('j and k walk the rows and Enter opens the record', async () => {
  const { user } = open('/history')
  await link(120)
  focusPage()
  await user.keyboard('jjk')
  expect(document.activeElement).toBe(await link(120))
  await user.keyboard('j{Enter}')
  expect(window.location.pathname).toBe(`/records/${recordId(119)}`)
})

test('/ goes to the unit field, where letters are text and not keys', async () => {
  const { user } = open('/history')
  await link(120)
  focusPage()
  await user.keyboard('/')
  expect(document.activeElement).toBe(screen.getByLabelText('unit'))
  await user.keyboard('gd]')
  expect(window.location.pathname).toBe('/history')
  expect(screen.getByLabelText('unit')).toHaveValue('gd]')
})

test('numbers show a true minus, and none where a value does not exist', async () => {
  const server = fakeServer()
  const line = { ...recordLine(4), gainErrorPpm: -1021.734, gainCode: null }
  server.on('GET /trims', () => json({ items: [line], next: null }))
  open('/history', server)
  const row = (await link(4)).closest('tr')
  if (!row) throw new Error('no row')
  expect(within(row).getByText('\u22121021.73')).toBeVisible()
  expect(within(row).getAllByText('none').length).toBeGreaterThan(0)
})

test('nothing recorded yet says where the first one comes from', async () => {
  const server = fakeServer()
  server.on('GET /trims', () => json({ items: [], next: null }))
  open('/history', server)
  await screen.findByText(/No record yet/)
})

test('a refusal stands in the place of the list with its sentence', async () => {
  const server = fakeServer()
  server.on('GET /trims', () => refusal('forbidden', 'That is not open to your role.'))
  open('/history', server)
  await screen.findByRole('heading', { level: 1, name: 'Records: not open to you' })
  expect(screen.getByText(/An administrator can/)).toBeVisible()
})
