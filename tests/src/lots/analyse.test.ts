import { describe, expect, test } from 'vitest'
import { designDocument } from '../../../shared/contract/design.ts'
import type { StationMonth } from '../../../shared/contract/lots.ts'
import { analyse } from '../../../src/features/lot/analyse.ts'
import { compareStations } from '../../../src/features/lot/stations.ts'
import { shareText, whySentence } from '../../../src/features/lot/words.ts'
import { lotPlace, lotUnit } from '../../support/lot-fixtures.ts'
import { exampleDesign } from '../../support/solver-fixtures.ts'

const design = designDocument.parse(exampleDesign('unipolar-18'))
const units = Array.from({ length: 40 }, (_, n) => lotUnit(n + 1))
const foundOf = (n: number, change: object) => ({ ...lotPlace(n).found!, ...change })

describe('analyse', () => {
  test('reach and demand are those of the picture: ±763 and ±609 ppm, and capability stands at 20 % less effect', () => {
    const { gain, points } = analyse(design, units, 'u10', null)
    expect(points).toHaveLength(40)
    expect(gain?.reach.high).toBeCloseTo(763.9, 0)
    expect(gain?.demand?.high).toBeCloseTo(609.4, 0)
    expect(gain?.worst.high).toBeCloseTo(0.8 * gain!.reach.high, 9)
    const { mean, s } = gain!.spread!
    expect(gain?.capability?.cp).toBeCloseTo((gain!.worst.high - gain!.worst.low) / (6 * s!), 12)
    expect(gain?.chart?.mean).toBeCloseTo(mean, 12)
  })

  test('out of reach is drawn and not counted; reference units and unaccepted suspects are neither', () => {
    const plain = analyse(design, units, 'u10', null)
    const more = [
      ...units,
      lotUnit(41, {
        standing: 'out-of-reach',
        place: { found: foundOf(41, { gainErrorPpm: -1897, verdict: 'out-of-reach' }), codes: null },
      }),
      lotUnit(42, { reference: true, place: { found: foundOf(42, { gainErrorPpm: 5000 }) } }),
      lotUnit(43, {
        standing: 'suspect',
        place: { found: foundOf(43, { gainErrorPpm: 900, verdict: 'suspect' }), codes: null },
      }),
      lotUnit(44, {
        standing: 'overridden',
        place: {
          standing: 'overridden',
          found: foundOf(44, { gainErrorPpm: plain.gain!.spread!.mean, verdict: 'suspect' }),
        },
      }),
    ]
    const { gain, points, outOfReach } = analyse(design, more, 'u10', null)
    expect(points.map(({ unit }) => unit).filter((unit) => Number(unit) > 40)).toEqual(['041', '044'])
    expect(outOfReach).toBe(1)
    expect(gain?.spread?.n).toBe(41)
    expect(gain?.spread?.mean).toBeCloseTo(plain.gain!.spread!.mean, 9)
  })

  test('a lot that is all out of reach is counted all the same, and says so', () => {
    const out = units.map((_, n) =>
      lotUnit(n + 1, {
        standing: 'out-of-reach',
        place: { found: foundOf(n + 1, { verdict: 'out-of-reach' }), codes: null },
      }),
    )
    expect(analyse(design, out, 'u10', null).gain).toMatchObject({ from: 'all', spread: { n: 40 } })
  })

  test('one channel, one range, and the order of reading', () => {
    const mixed = [
      lotUnit(2, { places: [lotPlace(2), lotPlace(3, { channel: '2' })] }),
      lotUnit(1, { places: [lotPlace(1, { range: 'other' }), lotPlace(1)] }),
    ]
    expect(analyse(design, mixed, 'u10', '1').points.map(({ unit }) => unit)).toEqual(['001', '002'])
    expect(analyse(design, mixed, 'u10', null).points).toHaveLength(3)
  })

  test('a design without adjusters or without a budget has no sides, or no demand', () => {
    const { budget: _, ...rest } = design
    expect(analyse(rest as typeof design, units, 'u10', null).gain?.demand).toBeNull()
    const bare = analyse({ ...design, adjusters: {} } as typeof design, units, 'u10', null)
    expect([bare.gain, bare.offset, bare.points.length]).toEqual([null, null, 40])
    expect(analyse(design, [], 'u10', null).gain).toMatchObject({
      spread: null,
      chart: null,
      capability: null,
    })
  })
})

describe('stations', () => {
  const month = (
    station: string,
    at: string,
    gainMeanPpm: number,
    unit: string | null = null,
  ): StationMonth => ({
    station,
    month: at,
    unit,
    channel: '1',
    range: 'u10',
    n: 40,
    gainMeanPpm,
    gainS: 10,
    offsetMeanV: 0,
    offsetS: 1e-6,
  })
  const months = ['2026-06', '2026-07', '2026-08', '2026-09', '2026-10', '2026-11']

  test('a station that moves 7 ppm a month is found, with its uncertainty', () => {
    const items = months.flatMap((at, i) => [month('A', at, -118), month('B', at, -118 - 7 * i)])
    const { newest, drift, by, lines } = compareStations(items, 'u10', 'gain')
    expect(by).toBe('units')
    expect(newest).toMatchObject({ first: 'A', second: 'B', month: '2026-11' })
    expect(newest!.difference.value).toBeCloseTo(-35, 9)
    // u² = 100/40 + 100/40.
    expect(newest!.difference.standard).toBeCloseTo(Math.sqrt(5), 12)
    expect(drift!.perStep).toBeCloseTo(-7, 9)
    expect(drift!.isClear).toBe(true)
    expect(lines[0]!.points).toHaveLength(6)
  })

  test('over the turn of a year months stay one apart', () => {
    const items = ['2025-11', '2025-12', '2026-01'].flatMap((at, i) => [
      month('A', at, 0),
      month('B', at, 2 * i),
    ])
    expect(compareStations(items, 'u10', 'gain').drift!.perStep).toBeCloseTo(2, 9)
  })

  test('reference units go first, each less its own mean', () => {
    const items = [
      ...months.flatMap((at) => [month('A', at, 300, 'R1'), month('B', at, 301, 'R1')]),
      ...months.flatMap((at) => [month('A', at, -90, 'R2'), month('B', at, -89, 'R2')]),
      ...months.map((at) => month('A', at, 1_000)),
    ]
    const { by, newest, lines } = compareStations(items, 'u10', 'gain')
    expect(by).toBe('reference')
    expect(newest!.difference.value).toBeCloseTo(1, 9)
    expect(lines.map(({ points }) => points[0]!.value)).toEqual([
      expect.closeTo(-0.5, 9),
      expect.closeTo(0.5, 9),
    ])
  })

  test('one station alone, or nothing, compares nothing', () => {
    expect(compareStations([month('A', '2026-06', 1)], 'u10', 'gain')).toMatchObject({
      newest: null,
      drift: null,
    })
    expect(compareStations([], 'u10', 'offset').lines).toEqual([])
  })
})

describe('words', () => {
  const said = { record: '', station: null, at: '', flags: [], reachUsed: {}, worstLsb: 0.812 }
  test.each([
    [
      { verdict: 'out-of-reach', reachUsed: { gain: 2.488, offset: 0.1 } },
      'Gain wants 2.49 times the reach. Wrong resistor?',
    ],
    [{ verdict: 'out-of-reach', reachUsed: { gain: null } }, 'No code is in reach.'],
    [
      {
        verdict: 'suspect',
        flags: [
          { flag: 'unsettled', code: 196608 },
          { flag: 'outlier', code: 196608 },
        ],
      },
      'Unsettled and outlier at code 196608. Read again, or decide.',
    ],
    [{ verdict: 'conditional-pass' }, 'As left 0.81 LSB, inside the guard band. One pass more would do.'],
    [{ verdict: 'fail', worstLsb: -1.5 }, 'As left 1.50 LSB, over the tolerance.'],
  ])('%j', (change, sentence) => {
    expect(whySentence({ ...said, ...change } as Parameters<typeof whySentence>[0])).toBe(sentence)
  })

  test('a small share is said as small and never as nothing', () => {
    expect([0.25, 0.0123, 2e-5, 3e-7, 1e-11, 0].map(shareText)).toEqual([
      '25.0 %',
      '1.23 %',
      '20 ppm',
      '0.30 ppm',
      'under 0.01 ppm',
      'under 0.01 ppm',
    ])
  })
})
