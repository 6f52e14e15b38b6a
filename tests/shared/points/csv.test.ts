import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { isOgeeError } from '../../../shared/errors.ts'
import type { PointGroup } from '../../../shared/points/group.ts'
import { onlyGroup, parsePointsCsv, parsePointsCsvAsync } from '../../../shared/points/parse-csv.ts'
import { PointsReader } from '../../../shared/points/reader.ts'
import { refuseLargeCsv, splitCsv } from '../../../shared/points/split-csv.ts'
import { toCsv } from '../../../shared/points/to-csv.ts'

const pointsOf = (text: string) => parsePointsCsv(text).groups.map(({ points }) => points)
function refusal(text: string, options = {}) {
  try {
    parsePointsCsv(text, options)
  } catch (error) {
    if (isOgeeError(error)) return { code: error.code, message: error.message, path: error.errors[0]?.path }
    throw error
  }
  throw new Error('nothing was refused')
}

describe('points CSV', () => {
  const two = [
    { code: 0, measured: 0.001 },
    { code: 65535, measured: 9.5 },
  ]

  test.each([
    ['comma', 'code,measured\n0,0.001\n65535,9.5\n'],
    ['CRLF', 'code,measured\r\n0,0.001\r\n65535,9.5\r\n'],
    ['CR', 'code,measured\r0,0.001\r65535,9.5'],
    ['BOM', '\ufeffcode,measured\n0,0.001\n65535,9.5'],
    ['semicolon with decimal comma', 'code;measured\n0;0,001\n65535;9,5'],
    ['semicolon with decimal point', 'code;measured\n0;0.001\n65535;9.5'],
    ['tab', 'code\tmeasured\n0\t0,001\n65535\t9.5'],
    ['quotes', '"code","measured"\n"0","0.001"\n65535,"9.5"'],
    ['units', 'code,measured\n0,1 mV\n65535,9500 mV'],
    ['other order, own columns, blank rows', 'x_note,measured,code\nhi,0.001,0\n\n,,\nyo,9.5,65535\n'],
    ['hex code', 'code,measured\n0x0,0.001\n0xFFFF,9.5'],
  ])('%s', (_, text) => {
    expect(pointsOf(text)).toEqual([two])
  })

  test('every column arrives under its name', () => {
    const text =
      'unit,channel,range,lot,applied_gain,applied_offset,instrument,key,word,target,uncertainty,readings,read_at,temperature\n' +
      '031,2,u10,2417,0x800,2048,DMM-07,k1,0x8a1f,5 V,2 uV,4.9;5.1 V;5,2026-03-02T14:07:00+01:00,23.4 °C\n'
    const { groups, problems } = parsePointsCsv(text)
    expect(problems).toEqual([])
    expect(groups).toEqual([
      {
        unit: '031',
        channel: '2',
        range: 'u10',
        lot: '2417',
        instrument: 'DMM-07',
        key: 'k1',
        applied: { gain: 2048, offset: 2048 },
        firstLine: 2,
        lastLine: 2,
        points: [
          {
            word: '0x8A1F',
            target: 5,
            uncertainty: 2e-6,
            readings: [4.9, 5.1, 5],
            readAt: '2026-03-02T14:07:00+01:00',
            temperatureC: 23.4,
          },
        ],
      },
    ])
  })

  test('readings keep their semicolons inside quotes where the semicolon delimits', () => {
    expect(pointsOf('code;readings\n0;"1,5;1,25"\n')).toEqual([[{ code: 0, readings: [1.5, 1.25] }]])
  })

  test('rows next to each other with the same unit, channel and range are one measurement', () => {
    const { groups } = parsePointsCsv('unit,channel,code,measured\na,1,0,0\na,1,9,1\na,2,0,0\nb,1,0,0\n')
    expect(
      groups.map(({ unit, channel, points, firstLine, lastLine }) => [
        unit,
        channel,
        points.length,
        firstLine,
        lastLine,
      ]),
    ).toEqual([
      ['a', '1', 2, 2, 3],
      ['a', '2', 1, 4, 4],
      ['b', '1', 1, 5, 5],
    ])
  })

  test('the same unit again later is refused and named; with another key it is another measurement', () => {
    const again = parsePointsCsv('unit,code,measured\na,0,0\nb,0,0\na,0,0\n')
    expect(again.groups.map(({ unit }) => unit)).toEqual(['a', 'b'])
    expect(again.problems).toMatchObject([
      {
        code: 'duplicate-unit',
        line: 4,
        column: 'unit',
        unit: 'a',
        message: expect.stringContaining('line 2'),
      },
    ])
    expect(parsePointsCsv('unit,key,code,measured\na,1,0,0\nb,1,0,0\na,2,0,0\n').groups).toHaveLength(3)
    expect(parsePointsCsv('unit,key,code,measured\na,1,0,0\na,2,0,0\n').groups).toHaveLength(2)
  })

  test('columns of the measurement must agree within it', () => {
    const { groups, problems } = parsePointsCsv('unit,lot,code,measured\na,1,0,0\na,2,9,1\nb,1,0,0\n')
    expect(groups.map(({ unit }) => unit)).toEqual(['b'])
    expect(problems).toMatchObject([
      { code: 'csv-cell', line: 3, column: 'lot', message: expect.stringContaining('must agree') },
    ])
  })

  test.each([
    ['unit,code,measured\ngood,0,0\nbad,x,0\nlast,0,0', 3, 'code', /x is not a code/],
    ['unit,code,measured\ngood,0,0\nbad,0,five\nlast,0,0', 3, 'measured', /five cannot be read/],
    ['unit,code,measured\ngood,0,0\nbad,0,\nlast,0,0', 3, 'measured', /measured is missing/],
    ['unit,code,measured\ngood,0,0\nbad,,1\nlast,0,0', 3, 'code', /code, word or target is missing/],
    ['unit,code,measured\ngood,0,0\nbad,0,"1,5"\nlast,0,0', 3, 'measured', /write 1\.5/],
    ['unit,code,measured\ngood,0,0\nbad,0,1,5\nlast,0,0', 3, null, /more cells than the header/],
    ['unit,code,measured\ngood,0,0\nbad,0,5 ohm\nlast,0,0', 3, 'measured', /5 ohm is a resistance/],
    ['unit,code,measured,uncertainty\ngood,0,0,\nbad,0,0,0\nlast,0,0,', 3, 'uncertainty', /must be over 0 V/],
    ['unit,word,measured\ngood,0,0\nbad,xyz,0\nlast,0,0', 3, 'word', /hexadecimal/],
    [
      'unit,code,measured,read_at\ngood,0,0,\nbad,0,0,2026-02-30T10:00:00Z\nlast,0,0,',
      3,
      'read_at',
      /with the offset/,
    ],
    [
      'unit,code,measured,read_at\ngood,0,0,\nbad,0,0,2026-03-02 10:00\nlast,0,0,',
      3,
      'read_at',
      /with the offset/,
    ],
    ['unit,code,measured,readings\ngood,0,0,\nbad,0,0,1;2\nlast,0,0,', 3, 'readings', /not both/],
    ['unit,applied_gain,code,measured\ngood,1,0,0\nbad,1.5,0,0\nlast,1,0,0', 3, 'applied_gain', /not a code/],
    ['unit,code,measured\n"good",0,0\n"bad\nname",0,x\nlast,0,0', 3, 'measured', /x cannot be read/],
  ])('a bad cell costs its own unit only: %j', (text, line, column, words) => {
    const { groups, problems } = parsePointsCsv(text)
    expect(groups.map(({ unit }) => unit)).toEqual(['good', 'last'])
    expect(problems).toHaveLength(1)
    expect(problems[0]).toMatchObject({ line, column })
    expect(problems[0]!.message).toMatch(words)
    expect(problems[0]!.message).toContain(`Line ${line}`)
  })

  test.each([
    ['', 'csv-empty', /empty/],
    [' \n\r\n', 'csv-empty', /empty/],
    ['code,measured\n', 'csv-empty', /header and no points/],
    ['code,mesured\n0,0', 'csv-header', /column 2: Column mesured is unknown/],
    ['Code,measured\n0,0', 'csv-header', /Did you mean code/],
    ['code,measured,code\n0,0,0', 'csv-header', /column 3: Column code stands twice/],
    ['code\n0', 'csv-header', /measured \(or readings\) is missing/],
    ['measured\n0', 'csv-header', /code \(or word, or target\) is missing/],
    ['0,0.001\n1,0.002', 'csv-header', /Column 0 is unknown/],
    ['code,measured\n0,"0.1\n1,2\n', 'csv-quotes', /Line 2: a quote is opened and not closed/],
    ['code,measured\n0,1\n1,"2"x\n', 'csv-quotes', /Line 3: a quote stands in the wrong place/],
  ])('the whole file is refused: %j', (text, code, words) => {
    const got = refusal(text)
    expect(got.code).toBe(code)
    expect(got.message).toMatch(words)
  })

  test('a batch needs a unit; channel and range default to the only one and are required of several', () => {
    expect(refusal('code,measured\n0,0', { unitRequired: true }).message).toContain('Column unit is missing')
    expect(parsePointsCsv('unit,code,measured\n,0,0', { unitRequired: true }).problems[0]).toMatchObject({
      column: 'unit',
    })
    const one = { channels: ['1'], ranges: ['u10'] }
    expect(parsePointsCsv('code,measured\n0,0', one).groups[0]).toMatchObject({ channel: '1', range: 'u10' })
    const several = { channels: ['1', '2'], ranges: ['u10'] }
    expect(parsePointsCsv('code,measured\n0,0', several).problems[0]).toMatchObject({
      code: 'channel-required',
    })
    expect(parsePointsCsv('channel,code,measured\n3,0,0', several).problems[0]).toMatchObject({
      code: 'channel-unknown',
    })
    expect(parsePointsCsv('range,code,measured\nx,0,0', one).problems[0]).toMatchObject({
      code: 'range-unknown',
    })
  })

  test('one measurement of endless rows is named once and does not grow', () => {
    const text = `code,measured\n${'0,0\n'.repeat(5000)}`
    const { groups, problems } = parsePointsCsv(text)
    expect([groups.length, problems.length, problems[0]!.code]).toEqual([0, 1, 'too-many-points'])
  })

  test('commands that take one measurement name the first problem with all places, or that there are several', () => {
    expect(onlyGroup(parsePointsCsv('code,measured\n0,0\n1,1')).points).toHaveLength(2)
    expect(() => onlyGroup(parsePointsCsv('code,measured\n0,0\n1,x'))).toThrow('Line 3, measured')
    expect(() => onlyGroup(parsePointsCsv('unit,code,measured\na,0,0\nb,1,1'))).toThrow(
      'The second starts in line 3',
    )
  })

  test('cells with arithmetic load it once; the row is read again whole', async () => {
    let loads = 0
    const load = () => {
      loads += 1
      return import('../../../shared/quantity/arithmetic.ts')
    }
    const { groups } = await parsePointsCsvAsync('code,measured\n0,10/4096 V\n1,2*3 mV\n', load)
    expect(groups[0]!.points.map(({ measured }) => measured)).toEqual([10 / 4096, expect.closeTo(6e-3, 15)])
    expect(loads).toBe(1)
    await parsePointsCsvAsync('code,measured\n0,1\n', load)
    expect(loads).toBe(1)
  })

  test('rows can be pushed one by one, and each finished measurement is handed over at once', () => {
    const { rows, delimiter } = splitCsv('unit,code,measured\na,0,0\na,1,1\nb,0,0\n')
    const reader = new PointsReader(rows[0]!, delimiter)
    const seen: (string | undefined)[][] = []
    for (const row of rows.slice(1)) {
      reader.push(row)
      seen.push(reader.take().groups.map(({ unit }) => unit))
    }
    reader.end()
    expect(seen).toEqual([[], [], ['a']])
    expect(reader.take().groups.map(({ unit }) => unit)).toEqual(['b'])
  })

  test('a file over 10 MB is refused with the command that takes it', () => {
    expect(() => refuseLargeCsv(10 * 1024 * 1024)).not.toThrow()
    expect(() => refuseLargeCsv(10 * 1024 * 1024 + 1)).toThrow(/11 MB; 10 MB are taken here.*ogee batch/)
  })

  test('written CSV reads back to identical doubles and texts', () => {
    const double = fc.double({ noNaN: true, noDefaultInfinity: true }).map((v) => v + 0)
    const text = fc
      .string({
        minLength: 1,
        maxLength: 8,
        unit: fc.constantFrom('a', 'B', '"', ',', ';', '=', '-', 'é', ' ', '\n'),
      })
      .filter((t) => t.trim() === t)
    const group = fc.record({
      unit: text,
      points: fc.array(
        fc.oneof(
          fc.record({ code: fc.nat(65535), measured: double }),
          fc.record({ code: fc.nat(65535), readings: fc.array(double, { minLength: 1, maxLength: 4 }) }),
          fc.record({
            target: double,
            measured: double,
            uncertainty: double.filter((v) => v > 0),
            temperatureC: double,
          }),
        ),
        { minLength: 1, maxLength: 4 },
      ),
    })
    fc.assert(
      fc.property(
        fc.uniqueArray(group, { minLength: 1, maxLength: 4, selector: ({ unit }) => unit }),
        (groups) => {
          const written = toCsv(groups.map((g): PointGroup => ({ ...g, firstLine: 0, lastLine: 0 })))
          const { groups: read, problems } = parsePointsCsv(written)
          expect(problems).toEqual([])
          expect(read.map(({ unit, points }) => ({ unit, points }))).toEqual(groups)
        },
      ),
      { numRuns: 300 },
    )
  })
})
