import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { csv } from '../../../cli/table.ts'
import { guarded, unguarded } from '../../../shared/points/formula-guard.ts'
import { parsePointsCsv } from '../../../shared/points/parse-csv.ts'
import { splitCsv } from '../../../shared/points/split-csv.ts'
import { toCsv } from '../../../shared/points/to-csv.ts'

/** Texts that start as formulas do far more often than chance would have it. */
const text = fc
  .tuple(fc.constantFrom('', '=', '+', '-', '@', "'", "'=", "''-", '\t', '\0'), fc.string({ maxLength: 6 }))
  .map(([start, rest]) => start + rest)
const isLive = (cell: string) => /^[=+\-@\t\0]/.test(cell)

describe('ASVS V1.2.10 (S10): a CSV of ours runs nothing in a spreadsheet', () => {
  test('no text cell of 100,000 starts as a formula does, and each reads back', () => {
    fc.assert(
      fc.property(fc.array(text, { minLength: 100, maxLength: 100 }), (cells) => {
        for (const cell of cells) {
          expect(isLive(guarded(cell))).toBe(false)
          expect(unguarded(guarded(cell))).toBe(cell)
        }
      }),
      { numRuns: 1_000 },
    )
  })

  test('numbers are left alone, negative ones too, and come back bit for bit', () => {
    const double = fc.double({ noNaN: true, noDefaultInfinity: true }).map((value) => value + 0)
    fc.assert(
      fc.property(fc.array(double, { minLength: 50, maxLength: 50 }), (values) => {
        const { rows } = splitCsv(
          csv(
            ['value'],
            values.map((value) => [value]),
          ),
        )
        expect(rows.slice(1).map(({ cells }) => Number(cells[0]))).toEqual(values)
      }),
      { numRuns: 200 },
    )
  })

  test('the table of the command line and the points of Bench guard what people named', () => {
    expect(csv(['unit', 'ppm'], [['=cmd', -3]])).toBe("unit,ppm\n'=cmd,-3\n")
    const points = [{ code: 0, measured: -0.5 }]
    const written = toCsv([{ unit: '-031', lot: '@1', points, firstLine: 2, lastLine: 2 }])
    expect(written).toBe("unit,lot,code,measured\r\n'-031,'@1,0,-0.5\r\n")
    expect(parsePointsCsv(written).groups[0]).toMatchObject({ unit: '-031', lot: '@1', points })
  })
})
