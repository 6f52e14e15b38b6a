import { describe, expect, test } from 'vitest'
import { designDocument } from '../../../shared/contract/design.ts'
import { parsePointsCsv } from '../../../shared/points/parse-csv.ts'
import { planUpload } from '../../../src/features/lot/upload/plan.ts'
import { type RowReport, repairCsv, reportCsv } from '../../../src/features/lot/upload/report.ts'
import { exampleDesign } from '../../support/solver-fixtures.ts'

const design = designDocument.parse({ ...exampleDesign('unipolar-18'), channels: ['1'] })
const said = { design, key: 'DBS-A', lot: '2417', kind: 'trim' } as const
const fileOf = (text: string, name = 'points.csv') => {
  const bytes = new TextEncoder().encode(text)
  return { name, size: bytes.length, arrayBuffer: async () => bytes.buffer } as File
}
const rowsOf = (unit: string, change: (code: number) => string = (code) => String((code * 10) / 2 ** 18)) =>
  [0, 131072, 262143].map((code) => `${unit},${code},${change(code)}`).join('\n')
const head = 'unit,code,measured\n'

describe('planning an upload', () => {
  test('each unit is one request; the key comes from it alone, as on the command line', async () => {
    const plan = await planUpload(fileOf(`${head}${rowsOf('a')}\n${rowsOf('b')}`), said)
    expect(plan.problems).toEqual([])
    expect(plan.ready.map(({ unit, firstLine, lastLine }) => [unit, firstLine, lastLine])).toEqual([
      ['a', 2, 4],
      ['b', 5, 7],
    ])
    expect(plan.ready[0]!.body).toMatchObject({ design: 'DBS-A', lot: '2417', unit: 'a' })
    expect(plan.ready[0]!.body).not.toHaveProperty('kind')
    expect(plan.ready[0]!.key).toMatch(/^ogee1-[\w-]{43}$/)
    const other = await planUpload(fileOf(`${head}${rowsOf('x')}\n${rowsOf('a')}`, 'other.csv'), said)
    expect(other.ready[1]!.key).toBe(plan.ready[0]!.key)
    const left = await planUpload(fileOf(head + rowsOf('a')), { ...said, kind: 'verify' })
    expect(left.ready[0]!.body).toMatchObject({ kind: 'verify' })
    expect(left.ready[0]!.key).not.toBe(plan.ready[0]!.key)
  })

  test('a bad row costs its own unit, and is named by its line; another lot is refused', async () => {
    const bad = rowsOf('bad', (code) => (code === 131072 ? '' : String(code)))
    const text = `unit,lot,code,measured\n${[rowsOf('a'), bad, rowsOf('c')].join('\n').replaceAll(/^([^,]+),/gm, '$1,2417,')}`
    const plan = await planUpload(fileOf(`${text}\nd,9,0,1\nd,9,262143,2`), said)
    expect(plan.ready.map(({ unit }) => unit)).toEqual(['a', 'c'])
    expect(plan.problems.map(({ line, column, unit }) => [line, column, unit])).toEqual([
      [6, 'measured', 'bad'],
      [11, 'lot', 'd'],
    ])
  })

  test('what is no text, and what has no unit, is refused whole', async () => {
    const bytes = new Uint8Array([0xff, 0xfe, 0x00])
    const binary = { name: 'x.xlsx', size: 3, arrayBuffer: async () => bytes.buffer } as File
    await expect(planUpload(binary, said)).rejects.toMatchObject({ code: 'invalid-document' })
    await expect(planUpload(fileOf('code,measured\n0,1'), said)).rejects.toMatchObject({ code: 'csv-header' })
  })
})

describe('reports', () => {
  const report = (change: Partial<RowReport>): RowReport => ({
    firstLine: 3,
    lastLine: 3,
    unit: '',
    channel: '',
    range: '',
    verdict: null,
    message: 'measured is missing.',
    ...change,
  })

  test('rows to repair are whole units as they stand in the file, with what is wrong beside; they read back', () => {
    const text = `${head}${rowsOf('a')}\n${rowsOf('b, "b"'.replaceAll('"', '')).replaceAll('b, b', '"b, b"')}\n`
    const fixed = repairCsv(text, [
      report({ firstLine: 6, unit: 'b, b' }),
      report({ unit: 'a', verdict: 'suspect' }),
    ])
    const lines = fixed.trimEnd().split('\r\n')
    expect(lines[0]).toBe('unit,code,measured,x_problem')
    expect(lines).toHaveLength(4)
    expect(lines[2]).toContain('measured is missing.')
    expect(parsePointsCsv(fixed).groups.map(({ unit }) => unit)).toEqual(['b, b'])
    // Repaired once more, the column is replaced and not doubled.
    expect(repairCsv(fixed, [report({ firstLine: 2, unit: 'b, b', message: 'new' })]).split('\r\n')[0]).toBe(
      lines[0],
    )
  })

  test('of a measurement without a unit all rows are kept, not only the first that is named', async () => {
    const text = `${head}${rowsOf('a')}\n${rowsOf('')}\n`
    const { problems } = await planUpload(fileOf(text), said)
    expect(problems.map(({ line, column }) => [line, column])).toEqual([[5, 'unit']])
    const fixed = repairCsv(text, [report({ firstLine: 5, message: 'unit is missing.' })])
    expect(fixed.trimEnd().split('\r\n')).toEqual([
      'unit,code,measured,x_problem',
      ',0,0,unit is missing.',
      ',131072,5,',
      ',262143,9.999961853027344,',
    ])
  })

  test('a semicolon file stays one, so that its decimal commas stay what they are', () => {
    const text = 'unit;code;measured\na;0;0,5\na;262143;9,9\n'
    const fixed = repairCsv(text, [report({ firstLine: 2, unit: 'a' })])
    expect(parsePointsCsv(fixed).groups[0]!.points[0]).toMatchObject({ measured: 0.5 })
  })

  test('the report is guarded against formulas', () => {
    expect(reportCsv([report({ unit: '=1+1', message: 'x, y' })])).toContain(`'=1+1,,,,"x, y"`)
  })
})
