import Papa from 'papaparse'
import { describe, expect, test } from 'vitest'
import { csv } from '../../../cli/table.ts'
import type { Design } from '../../../shared/contract/design.ts'
import { codesHeads, codesRows } from '../../../shared/lots/codes-table.ts'
import { parseSerials } from '../../../shared/lots/serials.ts'
import { unguarded } from '../../../shared/points/formula-guard.ts'
import { lotUnit } from '../../support/lot-fixtures.ts'
import { runSeed, seededRandom } from '../../support/random.ts'
import { exampleDesign } from '../../support/solver-fixtures.ts'

describe('serials from a file', () => {
  test.each([
    ['one a line', '031\n032\n', ['031', '032']],
    ['CRLF, BOM, no last line end', '\ufeff031\r\n0032', ['031', '0032']],
    ['a column of a CSV', 'x_note,unit\nhello,031\n,"0""32"', ['031', '0"32']],
    ['the other name, semicolons', 'Serial;lot\n031;1', ['031']],
    ['twice is once', '031\n031', ['031']],
    ['emoji, accents, case', '🙂\né\nA\na', ['🙂', 'é', 'A', 'a']],
    ['guarded in a CSV', "unit\n'=1+1\n'-5", ['=1+1', '-5']],
  ])('%s', (_, text, serials) => {
    expect(parseSerials(text)).toEqual(serials)
  })

  test.each([
    ['', 'csv-empty'],
    ['unit\n', 'csv-empty'],
    ['a,b\n1,2', 'csv-header'],
    ['unit\n 031', 'csv-cell'],
    [`unit\n${'x'.repeat(65)}`, 'csv-cell'],
    ['unit\n"031', 'csv-quotes'],
  ])('%j is refused', (text, code) => {
    expect(() => parseSerials(text)).toThrow(expect.objectContaining({ code }))
  })
})

describe('codes of a lot', () => {
  const design = exampleDesign('bipolar-16') as Design

  test('a row for each place with codes, the word in the coding of the part', () => {
    const codes = { record: 'r', station: null, at: '2026-11-24T12:58:00Z', number: 5, gain: 3, offset: 2048 }
    const rows = codesRows(
      design,
      [
        lotUnit(1, { place: { codes } }),
        lotUnit(2, { place: { codes: null }, standing: 'suspect' }),
        lotUnit(3, { place: { codes }, reference: true }),
        lotUnit(4, { place: { codes } }),
      ],
      new Set(['004']),
    )
    expect(rows).toHaveLength(1)
    // Two's complement of 12 bits: mid-scale is 0.
    expect(rows[0]).toMatchObject({
      unit: '001',
      gain_code: 3,
      gain_word: '0x003',
      gain_word_decimal: 3,
      offset_code: 2048,
      offset_word: '0x000',
      offset_word_decimal: 0,
      number: 5,
    })
  })

  test('S10: no serial becomes a formula, and each comes back as it was (2,000 of them)', () => {
    const seed = runSeed()
    const random = seededRandom(seed)
    const letters = ['=', '+', '-', '@', "'", '"', ',', ';', '0', '1', 'a', ' ', '🙂', 'é', '|', '%']
    const serials = Array.from({ length: 2_000 }, () =>
      Array.from({ length: 1 + random.below(8) }, () => random.pick(letters)).join(''),
    )
    const units = serials.map((unit, i) => lotUnit(i, { unit }))
    const cells = codesRows(design, units).map((row) => codesHeads.map((head) => row[head]))
    const read = Papa.parse<string[]>(csv(codesHeads, cells).trimEnd()).data
    read.slice(1).forEach((row, i) => {
      expect(row[0], `seed ${seed}`).not.toMatch(/^[=+\-@\t\0]/)
      expect(unguarded(row[0]!), `seed ${seed}`).toBe(serials[i])
      expect(Number(row[codesHeads.indexOf('gain_code')])).toBe(cells[i]![5])
    })
  })
})
