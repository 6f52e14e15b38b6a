import Papa from 'papaparse'
import { describe, expect, it } from 'vitest'
import { type CsvCell, csvLine } from '../../../shared/points/csv-line.ts'
import { unguarded } from '../../../shared/points/formula-guard.ts'
import { runSeed, seededRandom } from '../../support/random.ts'

describe('S10, ASVS V1.2.10: a line of an export', () => {
  const seed = runSeed()
  const random = seededRandom(seed)
  const bits = new DataView(new ArrayBuffer(8))
  const double = () => {
    bits.setUint32(0, random.next() * 2 ** 32)
    bits.setUint32(4, random.next() * 2 ** 32)
    const value = bits.getFloat64(0)
    return Number.isFinite(value) && !Object.is(value, -0) ? value : -0.1
  }
  const starts = ['=', '+', '-', '@', '\t', '\r', "'=", "''+", '\u0000', '', 'a', '"', ',', '\n', ' =']
  const text = () =>
    random.pick(starts) +
    String.fromCharCode(
      ...Array.from({ length: random.below(6) }, () => random.pick([34, 39, 44, 10, 13, 61, 45, 65, 0x20ac])),
    )

  it(`has no live formula in 100,000 fuzzed cells, and gives back every text and every double (seed ${seed})`, () => {
    for (let i = 0; i < 10_000; i++) {
      const cells: CsvCell[] = Array.from({ length: 10 }, () => (random.next() < 0.4 ? double() : text()))
      const read = Papa.parse<string[]>(csvLine(['x', ...cells, 'x']), { newline: '\n' }).data[0]!.slice(
        1,
        -1,
      )
      const about = `seed ${seed}, line ${i}`
      for (const [j, cell] of cells.entries()) {
        if (typeof cell === 'number') expect(Object.is(Number(read[j]), cell), about).toBe(true)
        else {
          expect(read[j], about).not.toMatch(/^[=+\-@\t\r\0]/)
          expect(unguarded(read[j]!), about).toBe(cell)
        }
      }
    }
  })

  it('writes nothing as nothing', () => {
    expect(csvLine([null, undefined, '', 0])).toBe(',,,0')
  })
})
