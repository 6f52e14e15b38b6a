import { type LotCounts, type LotPlace, type Standing, standing } from '../../shared/contract/lot-standing.ts'
import type { Lot, LotDetail, LotUnit } from '../../shared/contract/lots.ts'
import { recordId } from './web-fixtures.ts'

/** Lots as the server answers them, for the command line's and the page's tests. */

const at = '2026-11-24T12:58:00.000Z'

export function lotCounts(change: Partial<Record<Standing, number>> = {}, missing = 0): LotCounts {
  const byStanding = Object.fromEntries(standing.options.map((one) => [one, change[one] ?? 0])) as Record<
    Standing,
    number
  >
  const of = (...standings: Standing[]) => standings.reduce((sum, one) => sum + byStanding[one], 0)
  const units = of(...standing.options)
  const good = of('ok-first', 'ok-later', 'overridden')
  return {
    units,
    good,
    undecided: of('out-of-reach', 'fail', 'conditional-fail', 'suspect', 'incomplete'),
    missing,
    references: 0,
    byStanding,
    share: units === 0 ? null : good / units,
    low95: units === 0 ? null : 0.884,
    high95: units === 0 ? null : 0.978,
  }
}

export function lotLine(change: Partial<Lot> = {}): Lot {
  return {
    key: '2417',
    design: 'DBS-A',
    revision: 1,
    state: 'open',
    openedAt: at,
    openedBy: 'line 2 script',
    closedAt: null,
    closedBy: null,
    signedOff: null,
    records: 96,
    expected: null,
    firstAt: at,
    lastAt: '2026-11-24T16:22:00.000Z',
    counts: lotCounts({
      'ok-first': 24,
      'ok-later': 67,
      'out-of-reach': 1,
      suspect: 2,
      'conditional-pass': 2,
    }),
    ...change,
  }
}

export function lotDetail(change: Partial<LotDetail> = {}): LotDetail {
  const line = lotLine(change)
  return {
    ...line,
    counts: line.counts ?? lotCounts(),
    revisionState: 'released',
    references: [],
    signOff: null,
    etag: '"1.open.96.96.0.0"',
    ...change,
  }
}

export function lotPlace(n: number, change: Partial<LotPlace> = {}): LotPlace {
  const said = {
    record: recordId(n),
    station: n % 2 === 0 ? 'Station A' : 'Station B',
    at: new Date(Date.parse(at) + n * 120_000).toISOString(),
  }
  // Spread without chance: a fixed pattern about -118 ppm.
  const gainErrorPpm = -118 + ((n * 37) % 101) - 50
  const offsetErrorV = (((n * 53) % 31) - 15) * 1e-6
  return {
    channel: '1',
    range: 'u10',
    standing: 'ok-first',
    pass: 1,
    found: { ...said, gainErrorPpm, offsetErrorV, verdict: 'ok' },
    codes: { ...said, number: 1_004_000 + n, gain: 2300 + (n % 200), offset: 2048 },
    left: { ...said, worstLsb: 0.05 * ((n % 11) + 1), outcome: 'pass' },
    attention: null,
    ...change,
  }
}

export const serialOf = (n: number) => String(n).padStart(3, '0')

export function lotUnit(n: number, change: Partial<LotUnit> & { place?: Partial<LotPlace> } = {}): LotUnit {
  const { place, ...rest } = change
  const standing = rest.standing ?? 'ok-first'
  return {
    unit: serialOf(n),
    reference: false,
    expected: false,
    standing,
    records: 1,
    places: [lotPlace(n, { standing, ...place })],
    ...rest,
  }
}
