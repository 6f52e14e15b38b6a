import { describe, expect, test } from 'vitest'
import { SeenUnits } from '../../../cli/batch/seen-units.ts'
import { PointsReader } from '../../../shared/points/reader.ts'
import { splitCsv } from '../../../shared/points/split-csv.ts'
import { CsvSplitter, type SplitRow } from '../../../shared/points/split-stream.ts'
import { runSeed, seededRandom } from '../../support/random.ts'

function inPieces(text: string, sizes: () => number): { rows: SplitRow[]; delimiter: string | null } {
  const splitter = new CsvSplitter()
  const rows: SplitRow[] = []
  for (let at = 0; at < text.length; ) {
    const size = sizes()
    rows.push(...splitter.push(text.slice(at, at + size)))
    at += size
  }
  rows.push(...splitter.end())
  return { rows, delimiter: splitter.delimiter }
}

describe('a CSV in pieces', () => {
  const seed = runSeed()
  test(`gives the rows that it gives as a whole, wherever it is cut (seed ${seed})`, () => {
    const random = seededRandom(seed)
    const cell = () =>
      random.pick([
        '',
        '0',
        '1.5',
        'S-1',
        '"a ""b"""',
        '"x, y"',
        '"two\nlines"',
        '"two\r\nlines"',
        '👩‍🔬',
        '007',
      ])
    for (let round = 0; round < 300; round += 1) {
      const end = random.pick(['\n', '\r\n', '\r'])
      const delimiter = random.pick([',', ';', '\t'])
      const lines = Array.from({ length: 1 + random.below(8) }, () =>
        Array.from({ length: 3 }, cell).join(delimiter),
      )
      const head = ['unit', 'code', 'measured'].join(delimiter)
      const text = `${random.pick(['', '\ufeff'])}${[head, ...lines].join(end)}${random.pick(['', end])}`
      const whole = splitCsv(text)
      expect(inPieces(text, () => 1 + random.below(9))).toEqual(whole)
    }
  })

  test('a quote in the wrong place costs its own line', () => {
    const text = 'unit,code\nA,"1\nB,2\nC,"3"4\nD,"5\n6"\n"E'
    for (const size of [1, 3, 100]) {
      const { rows } = inPieces(text, () => size)
      expect(rows.map((row) => (row.broken === undefined ? row.cells : row.broken.slice(0, 7)))).toEqual([
        ['unit', 'code'],
        'Line 2:',
        ['B', '2'],
        'Line 4:',
        ['D', '5\n6'],
        'Line 7:',
      ])
    }
  })

  test('a quote that nobody closes costs its line, and little memory', () => {
    const text = `unit,code\nA,"1\n${'B,2\n'.repeat(200_000)}`
    const { rows } = inPieces(text, () => 65_536)
    expect(rows).toHaveLength(2 + 200_000)
    expect(rows[1]).toMatchObject({ line: 2, broken: expect.stringContaining('not closed') })
    const endless = inPieces(`unit,code\n"${'x'.repeat(1_000_000)}\nB,2\n`, () => 65_536)
    expect(endless.rows.map(({ line }) => line)).toEqual([1, 2, 3])
  })
})

describe('a CSV without a header row', () => {
  test.each([
    ['no line end', 'x'],
    ['nothing but spaces', ' '],
    ['nothing but empty lines', '\n'],
  ])('%s: told after 256 KiB, not read to its end', (_, one) => {
    let pushed = 0
    const splitter = new CsvSplitter()
    const pushAll = () => {
      for (; pushed < 1_000; pushed += 1) splitter.push(one.repeat(65_536))
    }
    expect(pushAll).toThrow(/first 256 KiB .* no whole header row/)
    expect(pushed).toBeLessThan(10)
  })

  test('a header without a line end is the last row', () => {
    expect(inPieces('code,measured', () => 4).rows).toEqual([{ line: 1, cells: ['code', 'measured'] }])
  })
})

describe('a row that cannot be split', () => {
  const rows = (text: string) => {
    const { rows } = inPieces(text, () => 1_000)
    const [head, ...others] = rows
    const reader = new PointsReader(head as Extract<SplitRow, { cells: string[] }>, ',', {
      unitRequired: true,
    })
    for (const row of others)
      row.broken === undefined ? reader.push(row) : reader.refuseRow(row.line, row.broken)
    reader.end()
    const { groups, problems } = reader.take()
    return [groups.map(({ unit }) => unit), problems.map(({ line, unit }) => [line, unit])]
  }
  const head = 'unit,code,measured\n'

  test('within a measurement spoils that one only', () => {
    expect(rows(`${head}A,0,0\nA,1,1\nB,0,0\nB,"1,1\nB,2,2\nC,0,0\nC,1,1\n`)).toEqual([
      ['A', 'C'],
      [[5, 'B']],
    ])
  })
  test('between two spoils both: it may be of either', () => {
    expect(rows(`${head}A,0,0\nA,1,1\n"B,0,0\nB,1,1\nC,0,0\n`)).toEqual([
      ['C'],
      [
        [4, 'A'],
        [5, 'B'],
      ],
    ])
  })
  test('before all, and after all', () => {
    expect(rows(`${head}"A,0,0\nA,1,1\nB,0,0\n`)).toEqual([
      ['B'],
      [
        [2, undefined],
        [3, 'A'],
      ],
    ])
    expect(rows(`${head}A,0,0\nB,1,1\n"B,2,2\n`)).toEqual([['A'], [[4, 'B']]])
  })
})

describe('what a long file has had', () => {
  test('is found again among 100,000, in little memory, and nothing else is', () => {
    const seen = new SeenUnits()
    for (let i = 1; i <= 100_000; i += 1) expect(seen.firstLine(`unit ${i}`, i)).toBeUndefined()
    for (let i = 1; i <= 100_000; i += 997) expect(seen.firstLine(`unit ${i}`, 7)).toBe(i)
    expect(seen.firstLine('unit 0', 100_001)).toBeUndefined()
    expect(seen.firstLine('unit 0', 5)).toBe(100_001)
  })
})
