import { screen, waitFor, within } from '@testing-library/react'
import { beforeEach, describe, expect, test } from 'vitest'
import type { LotDetail, LotUnit } from '../../../shared/contract/lots.ts'
import { lotCounts, lotDetail, lotLine, lotPlace, lotUnit } from '../../support/lot-fixtures.ts'
import { open } from '../../support/web-render.tsx'
import { type FakeServer, fakeServer, json, refusal } from '../../support/web-server.ts'

const address = '/lots/DBS-A/2417'
const counts = lotCounts({ 'ok-first': 21, 'out-of-reach': 1 })
const bad = lotUnit(58, {
  standing: 'out-of-reach',
  place: {
    found: { ...lotPlace(58).found!, gainErrorPpm: -1897, verdict: 'out-of-reach' },
    codes: null,
    left: null,
    attention: {
      ...lotPlace(58).codes!,
      verdict: 'out-of-reach',
      flags: [],
      reachUsed: { gain: 2.49, offset: 0.1 },
      worstLsb: null,
    },
  },
})
const twentyTwo = [...Array.from({ length: 21 }, (_, n) => lotUnit(n + 1)), bad]

function serverWith(
  lot: Partial<LotDetail>,
  units: readonly LotUnit[],
  role: 'engineer' | 'auditor' = 'engineer',
) {
  const server = fakeServer({ role })
  server.on('GET /designs/:key/lots/:lot', () => json(lotDetail({ records: units.length, counts, ...lot })))
  server.on('GET /designs/:key/lots/:lot/units', () =>
    json({ items: units, next: null, newest: units.length, records: units.length }),
  )
  server.on('GET /designs/:key/lots/:lot/missing', () => json({ items: ['097'], next: null }))
  server.on('GET /designs/:key/stations', () => json({ items: [] }))
  return server
}

beforeEach(() => localStorage.clear())

const sent = (server: FakeServer, route: string) =>
  server.sent(route).map(({ body, headers }) => ({ body, headers }))

describe('one lot', () => {
  test('says what stops sign-off, shows the yield, and why a unit needs a look', async () => {
    open(address, serverWith({}, twentyTwo))
    await screen.findByRole('heading', { level: 1, name: '2417' })
    expect(screen.getByText('1 unit out of reach')).toBeVisible()
    const yields = screen.getByRole('table', { name: /Units by how they stand/ })
    expect(within(yields).getByText('95.5 %', { selector: 'tr:last-child td' })).toBeVisible()
    expect(
      (await screen.findAllByText('Gain wants 2.49 times the reach. Wrong resistor?'))[0],
    ).toBeInTheDocument()
    await screen.findByRole('heading', { name: 'Individuals chart, gain error as found' })
    expect(screen.getByText(/1 out of reach is left out of mean and s/)).toBeVisible()
    const walk = screen.getAllByRole('img', { name: /^Unit 001, channel 1/ })
    expect(walk[0]).toBeInTheDocument()
  })

  test('sign-off asks for a reason for each unit that is not right, and sends what was seen', async () => {
    const server = serverWith({ expected: 23, counts: { ...counts, missing: 1 } }, twentyTwo)
    server.on('POST /designs/:key/lots/:lot/sign-off', () =>
      refusal(
        'precondition-failed',
        'The lot has changed since you opened it. Look at it again, then sign off.',
      ),
    )
    const { user } = open(address, server)
    await user.click(await screen.findByRole('button', { name: 'Sign off lot' }))
    const dialog = await screen.findByRole('dialog', { name: 'Sign off lot 2417' })
    const act = within(dialog).getByRole('button', { name: 'Sign off' })
    await user.click(act)
    expect(within(dialog).getAllByText('At least 10 characters.')).toHaveLength(2)
    expect(server.sent('POST /designs/:key/lots/:lot/sign-off')).toHaveLength(0)
    await user.type(within(dialog).getByLabelText(/Unit 058/), 'wrong resistor R12')
    await user.type(within(dialog).getByLabelText(/1 unit more, 1 of them expected/), 'never delivered')
    await user.click(act)
    await within(dialog).findByText(/The lot has changed since/)
    const [request] = sent(server, 'POST /designs/:key/lots/:lot/sign-off')
    expect(request!.body).toEqual({
      leaveOut: [{ unit: '058', reason: 'wrong resistor R12' }],
      rest: { reason: 'never delivered' },
    })
    expect(request!.headers.get('if-match')).toBe('"1.open.96.96.0.0"')
  })

  test('what was typed for sign-off outlives a record that came in, until the lot is signed off', async () => {
    const server = serverWith({}, twentyTwo)
    const { user } = open(address, server)
    const opened = async () => {
      await user.click(await screen.findByRole('button', { name: 'Sign off lot' }))
      return within(await screen.findByRole('dialog', { name: 'Sign off lot 2417' }))
    }
    const first = await opened()
    await user.type(first.getByLabelText(/Unit 058/), 'wrong resistor R12')
    await user.type(first.getByLabelText('Note'), 'seen by two')
    await user.click(first.getByRole('button', { name: 'Cancel' }))
    const second = await opened()
    expect(second.getByLabelText(/Unit 058/)).toHaveValue('wrong resistor R12')
    expect(second.getByLabelText('Note')).toHaveValue('seen by two')
    server.on('POST /designs/:key/lots/:lot/sign-off', () => json(lotDetail({ records: 22, counts })))
    await user.click(second.getByRole('button', { name: 'Sign off' }))
    await waitFor(() => expect(screen.queryByRole('dialog')).toBeNull())
    expect(Object.keys(localStorage).filter((name) => name.includes('sign-off'))).toEqual([])
  })

  test('an auditor has no acts, absent and not grey; a signed lot says who and when', async () => {
    const signedOff = { by: 'R. Lindqvist', at: '2026-11-24T17:02:00Z', note: null }
    const signOff = { counts, leftOut: [{ unit: '058', reason: 'wrong resistor' }], leaf: '0'.repeat(64) }
    open(address, serverWith({ state: 'signed-off', signedOff, signOff }, twentyTwo, 'auditor'))
    await screen.findByText(
      'Signed off by R. Lindqvist, 2026-11-24 17:02, with 21 of 22 units good and 1 left out. Later records stand outside the lot.',
    )
    for (const name of ['Sign off lot', 'Add units', 'Close lot', 'Expect units'])
      expect(screen.queryByRole('button', { name })).toBeNull()
  })

  test('the chart shows errors as left, and the address keeps it', async () => {
    const { user } = open(address, serverWith({}, twentyTwo))
    await screen.findByRole('heading', { name: 'Individuals chart, gain error as found' })
    await user.click(screen.getByRole('radio', { name: 'as left' }))
    await screen.findByRole('heading', { name: 'Individuals chart, worst error as left' })
    expect(window.location.search).toBe('?chart=left')
    // The one out of reach was never verified.
    expect(screen.getAllByRole('img', { name: /^Unit \d+, channel 1, Station/ })).toHaveLength(21)
  })

  test('an empty lot says how to fill it; one of a design that is not there says nothing more', async () => {
    const { unmount } = open(address, serverWith({ counts: lotCounts(), records: 0 }, []))
    await screen.findByText(/No units yet/)
    expect(screen.getByText('ogee batch --lot 2417 points.csv')).toBeVisible()
    unmount()
    open('/lots/DBS-A/none')
    await screen.findByText('There is nothing here, or it is not open to you.')
  })

  test('what changed is asked for alone, and a record that slipped in below makes it read all again', async () => {
    const server = serverWith({}, twentyTwo)
    open(address, server)
    await screen.findByRole('heading', { name: 'Individuals chart, gain error as found' })
    const more = [...twentyTwo, lotUnit(23)]
    server.on('GET /designs/:key/lots/:lot', () => json(lotDetail({ records: 24, counts })))
    server.on('GET /designs/:key/lots/:lot/units', ({ query }) =>
      json({ items: query.has('since') ? [lotUnit(23)] : more, next: null, newest: 24, records: 24 }),
    )
    await waitFor(() => expect(server.sent('GET /designs/:key/lots/:lot/units')).toHaveLength(3))
    const asked = server.sent('GET /designs/:key/lots/:lot/units').map(({ query }) => query.get('since'))
    expect(asked).toEqual([null, '22', null])
  })
})

describe('reference units', () => {
  test('marked elsewhere, without a record, make all units be read again', async () => {
    const server = serverWith({}, twentyTwo)
    open(address, server)
    await screen.findByRole('heading', { name: 'Individuals chart, gain error as found' })
    server.on('GET /designs/:key/lots/:lot', () =>
      json(lotDetail({ records: 22, counts, references: ['003'] })),
    )
    await waitFor(() => expect(server.sent('GET /designs/:key/lots/:lot/units')).toHaveLength(2))
    const asked = server.sent('GET /designs/:key/lots/:lot/units').map(({ query }) => query.get('since'))
    expect(asked).toEqual([null, null])
  })
})

describe('the list', () => {
  test('filters stand in the address; lots not counted yet are asked for again', async () => {
    const server = fakeServer()
    let counted = false
    server.on('GET /lots', () => json({ items: [lotLine({ counts: counted ? counts : null })], next: null }))
    const { user } = open('/lots', server)
    await screen.findByText('counting')
    counted = true
    await screen.findByText('1 out of reach')
    await user.selectOptions(screen.getByLabelText('state'), 'closed')
    await waitFor(() => expect(window.location.search).toBe('?state=closed'))
    await waitFor(() => expect(server.sent('GET /lots').at(-1)?.query.get('state')).toBe('closed'))
  })

  test('a lot is opened with the serials that are understood, and with none that are not', async () => {
    const server = fakeServer()
    server.on('POST /lots', () => json(lotDetail({ key: '2418', records: 0, counts: lotCounts() }), 201))
    const { user } = open('/lots', server)
    await user.click(await screen.findByRole('button', { name: 'Open a lot' }))
    const dialog = await screen.findByRole('dialog', { name: 'Open a lot' })
    const field = (name: string) => within(dialog).getByLabelText(name)
    await user.type(field('Lot'), 'a b')
    await user.type(field('Units expected'), '031{Enter} 032')
    await user.click(within(dialog).getByRole('button', { name: 'Open the lot' }))
    expect(within(dialog).getByText(/line 2, unit/)).toBeVisible()
    expect(server.sent('POST /lots')).toHaveLength(0)
    await user.clear(field('Lot'))
    await user.type(field('Lot'), '2418')
    await user.clear(field('Units expected'))
    await user.type(field('Units expected'), '031{Enter}032')
    await user.click(within(dialog).getByRole('button', { name: 'Open the lot' }))
    await waitFor(() => expect(window.location.pathname).toBe('/lots/DBS-A/2418'))
    expect(server.sent('POST /lots')[0]?.body).toEqual({
      design: 'DBS-A',
      key: '2418',
      expected: ['031', '032'],
    })
  })
})
