import { expect, test } from 'vitest'
import { allSeries, decadeOf, seriesValues } from '../../../shared/solver/network-synthesis/series.ts'
import { vector } from '../../support/solver-fixtures.ts'

/** IEC 60063:2015 (tests/vectors/iec60063-series.json says where the copy of the tables comes from). */
const tables = vector<Record<'E24' | 'E96' | 'E192', number[]>>('iec60063-series.json')

test.each(allSeries)('%s is the table of IEC 60063', (series) => {
  expect(decadeOf(series)).toEqual(tables[series])
})

test('values over decades are the doubles that their names stand for', () => {
  expect(seriesValues('E96', 10, 1e7).every((ohm) => Number(ohm.toPrecision(3)) === ohm)).toBe(true)
  expect(seriesValues('E96', 1e3, 1e6).length).toBe(3 * 96 + 1)
  expect(seriesValues('E192', 9.2, 9.2)).toEqual([9.2])
})
