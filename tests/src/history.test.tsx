import { act, screen, waitFor, within } from '@testing-library/react'
import { expect, test, vi } from 'vitest'
import { recordId, recordLine } from '../support/web-fixtures.ts'
import { open, scrollPage } from '../support/web-render.tsx'
import { fakeServer, json, refusal } from '../support/web-server.ts'

const link = (n: number) => screen.findByRole('link', { name: String(1_004_000 + n) })
const focusPage = () => screen.getByRole('main').focus()

/** Rows of the table at 16 px letters, as the page reckons them; the view holds 31 of them. */
const rowPx = 25
const address = () => window.location.pathname + window.location.search

test('scrolling reads on, page by page, and draws only the rows near the view', async () => {
  const { server } = open('/history')
  await link(120)
  await waitFor(() => expect(server.sent('GET /trims')).toHaveLength(2))
  act(() => scrollPage(60 * rowPx))
  await link(60)
  expect(screen.queryByRole('link', { name: '1004090' })).toBeNull()
  await waitFor(() => expect(server.sent('GET /trims')).toHaveLength(3))
  act(() => scrollPage(119 * rowPx))
  await link(1)
  expect(screen.getAllByRole('link', { name: /^1004\d\d\d$/ }).length).toBeLessThan(60)
  expect(server.sent('GET /trims').map(({ query }) => query.get('after'))).toEqual([
    null,
    '1004071',
    '1004021',
  ])
  expect(screen.queryByRole('button', { name: /Older/ })).toBeNull()
})

test('older and newer walk the pages; the address follows and restores the row, without a step back for each', async () => {
  const { user, server, unmount } = open('/history')
  await link(120)
  const steps = window.history.length
  focusPage()
  await user.keyboard(']')
  await link(70)
  await waitFor(() => expect(window.location.search).toBe('?after=1004071'))
  await user.keyboard(']')
  await link(20)
  await waitFor(() => expect(window.location.search).toBe('?after=1004021'))
  await user.keyboard('[[')
  await waitFor(() => expect(window.location.search).toBe('?after=1004071'))
  act(() => scrollPage(60 * rowPx))
  await waitFor(() => expect(window.history.state.usr.top).toBe(60))
  expect(window.history.length).toBe(steps)
  // A reload keeps the history entry.
  const { usr } = window.history.state
  unmount()
  scrollPage(0)
  open(address(), server, usr)
  await link(60)
  await waitFor(() => expect(window.scrollY).toBe(60 * rowPx))
  act(() => scrollPage(0))
  await link(120)
})

test('an opened link starts at its page, and newer leads to the newest records', async () => {
  const { user } = open('/history?after=1004071')
  await link(70)
  expect(screen.queryByRole('link', { name: '1004071' })).toBeNull()
  expect(screen.getByRole('table')).toHaveAttribute('aria-rowcount', '-1')
  focusPage()
  await user.keyboard('[[')
  await link(120)
  expect(window.location.search).toBe('')
})

test('History chosen again in the rail begins at the newest record', async () => {
  const { user } = open('/history')
  await link(120)
  act(() => scrollPage(60 * rowPx))
  await link(60)
  await waitFor(() => expect(window.location.search).toBe('?after=1004071'))
  await user.click(screen.getByRole('link', { name: /^History/ }))
  await link(120)
  await waitFor(() => expect(window.scrollY).toBe(0))
  expect(window.location.search).toBe('')
})

test('rows are numbered for screen readers, and counted once the end is known', async () => {
  open('/history')
  const row = (await link(117)).closest('tr')
  expect(row).toHaveAttribute('aria-rowindex', '5')
  expect(screen.getByRole('table')).toHaveAttribute('aria-rowcount', '-1')
  act(() => scrollPage(60 * rowPx))
  await waitFor(() => expect(screen.getByRole('table')).toHaveAttribute('aria-rowcount', '121'))
})

test('the focused row keeps its focus however far one scrolls, and j goes on from it', async () => {
  const { user } = open('/history')
  const third = await link(118)
  act(() => third.focus())
  act(() => scrollPage(45 * rowPx))
  await link(75)
  expect(document.activeElement).toBe(third)
  await user.keyboard('j')
  expect(document.activeElement).toBe(await link(117))
})

test('what fails at the end keeps the rows and is tried again', async () => {
  const server = fakeServer()
  const { user } = open('/history', server)
  await link(120)
  await waitFor(() => expect(server.sent('GET /trims')).toHaveLength(2))
  server.on('GET /trims', () => refusal('too-many-requests', 'Too many requests. Wait a minute.'))
  act(() => scrollPage(60 * rowPx))
  await screen.findByText('Too many requests. Wait a minute.')
  expect(await link(60)).toBeVisible()
  server.on('GET /trims', () => json({ items: [recordLine(20)], next: null }))
  await user.click(screen.getByRole('button', { name: 'Try again' }))
  act(() => scrollPage(100 * rowPx))
  await link(20)
  expect(screen.queryByText('Too many requests. Wait a minute.')).toBeNull()
})

test('print holds the rows at hand, not only those in view', async () => {
  open('/history')
  await link(120)
  await waitFor(() => expect(document.querySelectorAll('tbody tr[aria-rowindex]').length).toBeLessThan(50))
  act(() => scrollPage(20 * rowPx))
  await link(70)
  act(() => scrollPage(0))
  await act(async () => window.dispatchEvent(new Event('beforeprint')))
  await waitFor(() => expect(document.querySelectorAll('tbody tr[aria-rowindex]')).toHaveLength(100))
})

test('filters stand in the address and are asked of the server; the page starts again', async () => {
  const { user, server } = open('/history?after=1004071')
  await link(70)
  await user.selectOptions(screen.getByLabelText('verdict'), 'suspect')
  await waitFor(() => expect(window.location.search).toBe('?verdict=suspect'))
  await link(117)
  expect(server.sent('GET /trims').at(-1)?.query.toString()).toContain('verdict=suspect')
  await user.type(screen.getByLabelText('unit'), 'none such{Enter}')
  await screen.findByText(/No record matches\. No serial here, .* begins with none such/)
  expect(window.location.search).toBe('?verdict=suspect&serial=none+such')
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

test('every filter goes through the address to the server as the contract has it', async () => {
  const { user, server } = open('/history?unit=DBS-24170-031&attempt=2')
  await screen.findByText(/120 match · newest first/)
  expect(screen.getByLabelText('unit')).toHaveValue('DBS-24170-031')
  await user.type(screen.getByLabelText('lot'), '2409, 2417{Enter}')
  await user.selectOptions(screen.getByLabelText('design'), 'DBS-A')
  await user.type(await screen.findByLabelText('revision'), '2{Enter}')
  await user.selectOptions(screen.getByLabelText('station'), 'station A')
  await user.selectOptions(screen.getByLabelText('by'), 'T. Ruiz')
  await user.type(screen.getByLabelText('from'), '2026-11-24{Enter}')
  await user.clear(screen.getByLabelText('unit'))
  await user.type(screen.getByLabelText('unit'), '031{Enter}')
  const expected = {
    attempt: '2',
    lot: '2409,2417',
    design: 'DBS-A',
    revision: '2',
    station: '11111111-1111-4111-8111-111111111111',
    by: '33333333-3333-4333-8333-333333333333',
    from: '2026-11-24',
    serial: '031',
  }
  await waitFor(() =>
    expect(Object.fromEntries(new URLSearchParams(window.location.search))).toEqual(expected),
  )
  for (const route of ['GET /trims', 'GET /history/count']) {
    await waitFor(() =>
      expect(Object.fromEntries(server.sent(route).at(-1)?.query ?? [])).toMatchObject(expected),
    )
  }
  await user.selectOptions(screen.getByLabelText('design'), '')
  await waitFor(() => expect(window.location.search).not.toContain('revision'))
})

test('on a phone seldom filters wait behind a button, but for those in force', async () => {
  const { user } = open('/history?station=11111111-1111-4111-8111-111111111111')
  await screen.findByText(/match · newest first/)
  const waits = (label: string) => screen.getByLabelText(label).closest('.hidden') !== null
  expect(['unit', 'lot', 'verdict', 'from', 'station'].filter(waits)).toEqual([])
  expect(['design', 'kind', 'by', 'attempt', 'finding', 'to'].filter((label) => !waits(label))).toEqual([])
  await user.click(screen.getByRole('button', { name: 'more filters' }))
  expect(['design', 'kind', 'by', 'attempt', 'finding', 'to'].filter(waits)).toEqual([])
})

test('a day that is none is said at its field and asked of nobody', async () => {
  const { user, server } = open('/history')
  await link(120)
  await user.type(screen.getByLabelText('from'), 'yesterday{Enter}')
  expect(screen.getByLabelText('from')).toHaveAccessibleDescription('A day, UTC, such as 2026-11-24.')
  expect(server.asked.some((one) => one.query.has('from'))).toBe(false)
})

test('an export asks for exactly what is filtered, shows how far it is, and a cut one makes no file', async () => {
  const made: Blob[] = []
  vi.stubGlobal(
    'URL',
    Object.assign(URL, {
      createObjectURL: (blob: Blob) => made.push(blob),
      revokeObjectURL: () => undefined,
    }),
  )
  const { user, server } = open('/history?verdict=suspect')
  await link(117)
  server.on('GET /history/export.csv', () => new Response('number,unit\n1,A\n2,B\n'))
  focusPage()
  await user.keyboard('e')
  await user.click(await screen.findByRole('button', { name: /^CSV, about 23 kB/ }))
  await screen.findByText('2 records, 20 B, handed to the browser.')
  expect(server.sent('GET /history/export.csv').at(-1)?.query.toString()).toBe('verdict=suspect')
  expect(made).toHaveLength(1)
  const cut = new ReadableStream({
    start: (controller) => controller.enqueue(new TextEncoder().encode('{}\n')),
    pull: (controller) => controller.error(new TypeError('terminated')),
  })
  server.on('GET /history/export.ndjson', () => new Response(cut))
  await user.click(screen.getByRole('button', { name: /^JSON lines/ }))
  await screen.findByText('The export was cut on its way; no file was made. Start it again.')
  expect(made).toHaveLength(1)
})
