import { spawn } from 'node:child_process'
import { copyFileSync, mkdirSync, readFileSync, renameSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { beforeAll, describe, expect, test } from 'vitest'
import type * as z from 'zod'
import { codesDocument, fitDocument } from '../../shared/contract/codes.ts'
import { problem } from '../../shared/contract/problem.ts'
import { verifyDocument } from '../../shared/contract/verify.ts'
import { builtCli, ended, examples, problemOf } from './support/built-cli.ts'

const cli = builtCli()
const read = (name: string) => readFileSync(join(examples, name), 'utf8')
const put = (name: string, text: string) => {
  writeFileSync(join(cli.folder, name), text)
  return name
}
const parsed = <T extends z.ZodType>(schema: T, text: string) => schema.parse(JSON.parse(text)) as z.output<T>

beforeAll(() => {
  mkdirSync(cli.folder, { recursive: true })
  for (const name of ['unipolar-18', 'bipolar-16', 'out-of-reach']) {
    for (const part of ['design.json', 'points.csv'])
      copyFileSync(join(examples, `${name}.${part}`), join(cli.folder, `${name}.${part}`))
  }
})

type Expected = {
  fit: {
    offsetErrorV: number
    gainErrorPpm: number
    maxResidualLsb: number
    standardUncertainty: { offsetV: number; gainPpm: number }
    chiSquared: number | null
  }
  codes: { gain: number; offset: number } | null
  exactNodeV: { gain: number; offset: number }
  outOfReach: string[]
  predicted: { offsetErrorV: number; gainErrorPpm: number; worstLsb: number } | null
}

describe('the examples give the results that were computed exactly', () => {
  const fsr = { 'unipolar-18': 10, 'bipolar-16': 20, 'out-of-reach': 10 }
  const verdicts = {
    'unipolar-18': ['ok', 0],
    'bipolar-16': ['ok', 0],
    'out-of-reach': ['out-of-reach', 10],
  } as const

  test.each(['unipolar-18', 'bipolar-16', 'out-of-reach'] as const)('%s', async (name) => {
    const expected = JSON.parse(read(`${name}.expected.json`)) as Expected
    const { code, stdout, stderr } = await cli.run([
      'codes',
      '--design',
      `${name}.design.json`,
      '--points',
      `${name}.points.csv`,
    ])
    expect(stderr).toBe('')
    const { fit, trim } = parsed(codesDocument, stdout)
    expect([trim.verdict, code]).toEqual(verdicts[name])
    expect(trim.codes).toEqual(expected.codes)

    // As the files say: 1e-9 relative, or 1e-15 of FSR (offsets) and 1e-15 (gain), whichever is larger.
    const near = (got: number | undefined, wanted: number, least: number) =>
      expect(Math.abs((got ?? Number.NaN) - wanted)).toBeLessThanOrEqual(
        Math.max(Math.abs(wanted) * 1e-9, least),
      )
    const [volt, ppm] = [1e-15 * fsr[name], 1e-15 * 1e6]
    near(fit.offsetErrorV, expected.fit.offsetErrorV, volt)
    near(fit.gainErrorPpm, expected.fit.gainErrorPpm, ppm)
    near(fit.linearity.maxLsb, expected.fit.maxResidualLsb, 1e-15 * 2 ** 18)
    near(fit.standardUncertainty?.offsetV, expected.fit.standardUncertainty.offsetV, volt)
    near(fit.standardUncertainty?.gainPpm, expected.fit.standardUncertainty.gainPpm, ppm)
    if (expected.fit.chiSquared === null) expect(fit.chiSquared).toBeNull()
    else near(fit.chiSquared ?? undefined, expected.fit.chiSquared, 0)
    near(trim.exactNodeV.gain, expected.exactNodeV.gain, 1e-12)
    near(trim.exactNodeV.offset, expected.exactNodeV.offset, 1e-12)
    expect(['gain', 'offset'].filter((which) => trim.shortfall && which in trim.shortfall)).toEqual(
      expected.outOfReach,
    )
    if (expected.predicted === null) expect(trim.predicted).toBeNull()
    else {
      near(trim.predicted?.offsetErrorV, expected.predicted.offsetErrorV, volt)
      near(trim.predicted?.gainErrorPpm, expected.predicted.gainErrorPpm, ppm)
      near(trim.predicted?.worstLsb, expected.predicted.worstLsb, 1e-15 * 2 ** 18)
    }
  })
})

/** The example's design with something changed. */
function designWith(change: (design: Record<string, never>) => void): string {
  const design = JSON.parse(read('unipolar-18.design.json')) as Record<string, never>
  change(design)
  return put(`design-${Math.random().toString(36).slice(2)}.json`, JSON.stringify(design))
}
type Changeable = {
  target: { residual: { value: number } }
  decision: { rule: string; tolerance: { value: number; unit: string } }
  measurement: Record<string, unknown>
  [key: string]: unknown
}
const changed = (change: (design: Changeable) => void) =>
  designWith((design) => change(design as unknown as Changeable))

describe('L1: verdicts and their exit codes', () => {
  const codes = async (design: string, csv: string) => {
    const ran = await cli.run(['codes', '--design', design, '--points', '-'], { input: csv })
    return { exit: ran.code, document: parsed(codesDocument, ran.stdout) }
  }

  test('11, too coarse: in reach, and over the target all the same', async () => {
    const design = changed((d) => {
      d.target.residual.value = 0.01
    })
    const { exit, document } = await codes(design, read('unipolar-18.points.csv'))
    expect([exit, document.trim.verdict]).toEqual([11, 'too-coarse'])
    expect(document.trim.codes).not.toBeNull()
  })

  test('12, suspect: codes are given and marked', async () => {
    const csv = read('bipolar-16.points.csv').replace('-4.999845', '-4.9900')
    const { exit, document } = await codes('bipolar-16.design.json', csv)
    expect([exit, document.trim.verdict]).toEqual([12, 'suspect'])
    expect(document.trim.codes).not.toBeNull()
  })

  const verify = async (tolerance: number, error: number) => {
    const design = changed((d) => {
      d.decision = { rule: 'guarded', tolerance: { value: tolerance, unit: 'V' } }
    })
    const csv = `code,measured,uncertainty\n0,${error},1e-6\n131072,5,1e-6\n`
    const ran = await cli.run(['verify', '--design', design, '--points', '-'], { input: csv })
    return [ran.code, parsed(verifyDocument, ran.stdout).outcome]
  }

  test('0, 14, 15 and 13: pass, conditional pass, conditional fail, fail', async () => {
    // U is about 2 µV: the guard band stands from 8 to 12 µV.
    expect(await verify(10e-6, 3e-6)).toEqual([0, 'pass'])
    expect(await verify(10e-6, 9.5e-6)).toEqual([14, 'conditional-pass'])
    expect(await verify(10e-6, 10.5e-6)).toEqual([15, 'conditional-fail'])
    expect(await verify(10e-6, 20e-6)).toEqual([13, 'fail'])
  })

  test('fit has no verdict: 0 even for what is out of reach', async () => {
    const ran = await cli.run([
      'fit',
      '--design',
      'out-of-reach.design.json',
      '--points',
      'out-of-reach.points.csv',
      '--method',
      'terminal',
    ])
    expect(ran.code).toBe(0)
    expect(parsed(fitDocument, ran.stdout).fit.method).toBe('terminal')
  })
})

describe('bad input: placed, 65, nothing on standard output', () => {
  const refused = async (args: readonly string[], input = '') => {
    const ran = await cli.run(args, { input })
    expect(ran.stdout).toBe('')
    const found = problem.parse(problemOf(ran))
    expect(found.exit).toBe(ran.code)
    // People read the sentence first; the document stands last and alone.
    expect(ran.stderr.startsWith(`ogee: ${found.detail}\n`)).toBe(true)
    return { ...found, code: found.code, ran }
  }
  const points = (csv: string) =>
    refused(['codes', '--design', 'unipolar-18.design.json', '--points', '-'], csv)

  test.each<[string, string, string, RegExp]>([
    ['one point only', 'code,measured\n0,0.001\n', 'too-few-codes', /two/i],
    ['two points with one code', 'code,measured\n7,0.001\n7,0.0011\n', 'too-few-codes', /two/i],
    [
      'millivolts typed as volts',
      'code,measured\n0,0.0013\n131072,4998.9783\n262143,9997.9342\n',
      'implausible-point',
      /131072/,
    ],
    [
      'text in a number cell',
      'code,measured\n0,0.001\n131072,about five\n',
      'csv-cell',
      /^Line 3, measured: /,
    ],
    [
      'a comma for a point',
      'code;measured;x_note\n0;0,001;a\n131072;5,1,2;b\n',
      'csv-cell',
      /^Line 3, measured: /,
    ],
    [
      'a unit of the wrong kind',
      'code,measured\n0,0.001\n131072,5 ohm\n',
      'csv-cell',
      /^Line 3, measured: .*(resistance|ohm)/,
    ],
    ['a code above full scale', 'code,measured\n0,0.001\n262144,10\n', 'code-out-of-range', /262144/],
    ['a target outside the range', 'target,measured\n0,0.001\n10.5,10.4\n', 'outside-range', /10\.5/],
    [
      'u of 0',
      'code,measured,uncertainty\n0,0.001,0\n131072,5,1e-6\n',
      'uncertainty-not-positive',
      /^Line 2, uncertainty: /,
    ],
    [
      'a negative u',
      'code,measured,uncertainty\n0,0.001,1e-6\n131072,5,-1e-6\n',
      'uncertainty-not-positive',
      /^Line 3, uncertainty: /,
    ],
    ['quotes broken', 'code,measured\n0,"0.001\n131072,5\n', 'csv-quotes', /line 2/i],
    ['a wrong header', 'code,volts\n0,0.001\n', 'csv-header', /column 2: Column volts is unknown/],
    ['a header without measured', 'code,word\n0,0\n', 'csv-header', /measured/],
    ['an empty file', '', 'csv-empty', /./],
    ['a header alone', 'code,measured\n', 'csv-empty', /./],
    [
      'the same measurement twice',
      'unit,code,measured\n1,0,0\n1,262143,9.99\n2,0,0\n1,0,0\n',
      'duplicate-unit',
      /line 2/,
    ],
    [
      'two measurements',
      'unit,code,measured\n1,0,0\n1,262143,9.99\n2,0,0\n2,262143,9.99\n',
      'csv-cell',
      /2 measurements.*line 4/,
    ],
    ['an infinite number', 'code,measured\n0,Infinity\n1,1\n', 'csv-cell', /^Line 2, measured: /],
    ['arithmetic that is none', 'code,measured\n0,0\n262143,10*(1-\n', 'csv-cell', /^Line 3, measured: /],
  ])('%s', async (_, csv, code, sentence) => {
    const found = await points(csv)
    expect({ code: found.code, exit: found.exit }).toEqual({ code, exit: 65 })
    expect(found.detail).toMatch(sentence)
  })

  test('every bad row is listed, not only the first', async () => {
    const { errors } = await points('code,measured\n0,x\n1,1\n2,y\n')
    expect(errors?.map(({ path }) => path)).toEqual(['line 2, measured', 'line 4, measured'])
  })

  test('a CSV over 10 MB names ogee batch, from a file and from a pipe', async () => {
    const big = `code,measured\n${'0,0.0000001\n'.repeat(900_000)}`
    expect(await points(big)).toMatchObject({ code: 'csv-too-large', exit: 65 })
    put('big.csv', big)
    const fromFile = await refused(['fit', '--design', 'unipolar-18.design.json', '--points', 'big.csv'])
    expect(fromFile.detail).toContain('ogee batch')
  })

  test('a file that is not UTF-8', async () => {
    writeFileSync(join(cli.folder, 'latin.csv'), Buffer.from('code,measured,x_note\n0,1,\xb5\n', 'latin1'))
    const found = await refused(['codes', '--design', 'unipolar-18.design.json', '--points', 'latin.csv'])
    expect(found.detail).toContain('UTF-8')
    expect(found.exit).toBe(65)
  })

  const withDesign = (design: string) =>
    refused(['codes', '--design', design, '--points', 'unipolar-18.points.csv'])

  test('an unknown key in a design is named, with its place', async () => {
    const found = await withDesign(
      changed((d) => {
        d.measurement.noize = 1
      }),
    )
    expect(found).toMatchObject({ code: 'invalid-document', exit: 65 })
    expect(found.errors).toEqual([
      { path: '/measurement/noize', message: 'The key "noize" is not known here.' },
    ])
    expect(found.detail).toContain('noize')
  })

  test('a design that is no JSON, cut off, of a newer format, of another kind', async () => {
    expect((await withDesign(put('a.json', '{\n "format": x }'))).detail).toMatch(
      /a\.json is not JSON at line 2, column 12/,
    )
    expect((await withDesign(put('b.json', '{"format":'))).detail).toMatch(/b\.json is not JSON/)
    const newer = await withDesign(put('c.json', '{"format":"ogee.design/2"}'))
    expect(newer).toMatchObject({ code: 'unknown-format', exit: 65 })
    expect(newer.detail).toContain('reads ogee.design/1')
    expect(await withDesign(put('d.json', '{"format":"ogee.codes/1"}'))).toMatchObject({
      code: 'unknown-format',
    })
    expect(await withDesign(put('e.json', '[]'))).toMatchObject({ code: 'invalid-document' })
  })

  test('singular adjusters', async () => {
    const found = await withDesign(
      changed((d) => {
        const adjusters = d.adjusters as Record<'gain' | 'offset', { effect: unknown }>
        adjusters.offset.effect = adjusters.gain.effect
      }),
    )
    expect(found).toMatchObject({ code: 'adjusters-not-independent', exit: 65 })
  })

  test('66 for a file that is missing, 74 for one that cannot be read', async () => {
    const missing = await refused(['codes', '--design', 'nothing.json', '--points', '-'])
    expect(missing).toMatchObject({ code: 'input-missing', exit: 66 })
    expect(missing.detail).toContain('nothing.json')
    expect(await refused(['codes', '--design', '.', '--points', '-'])).toMatchObject({
      code: 'read-failed',
      exit: 74,
    })
  })

  test('a flag and a column that differ', async () => {
    const csv = 'range,applied_gain,code,measured\nu10,2593,0,0\nu10,2593,262143,9.9999\n'
    const args = ['codes', '--design', 'unipolar-18.design.json', '--points', '-']
    expect(await refused([...args, '--range', 'b10'], csv)).toMatchObject({
      code: 'invalid-request',
      exit: 65,
    })
    const found = await refused([...args, '--applied', 'gain=7'], csv)
    expect(found.detail).toContain('--applied says')
  })

  test('with table there is no document, with ndjson there is', async () => {
    const args = ['codes', '--design', 'nothing.json', '--points', '-']
    expect((await cli.run([...args, '--format', 'table'])).stderr).toBe(
      'ogee: There is no file nothing.json.\n',
    )
    expect(problemOf(await cli.run([...args, '--format', 'ndjson']))).toMatchObject({ exit: 66 })
  })
})

describe('arithmetic in a cell', () => {
  const csv =
    'code,measured\n0,3*0.4 uV + 0.1 uV\n65536,2.4994998\n131072,4998.9783 mV\n196608,7.4984718\n262143,9.9979342\n'
  const args = ['codes', '--design', 'unipolar-18.design.json', '--points', '-']

  test('is read by the part beside ogee.mjs', async () => {
    const ran = await cli.run(args, { input: csv })
    expect(ran.code).toBe(0)
    expect(parsed(codesDocument, ran.stdout).trim.codes).toEqual({ gain: 2593, offset: 2048 })
  })

  test('without that part: 65 with the remedy; plain quantities need it not', async () => {
    const part = join(cli.folder, 'bin/arithmetic.mjs')
    renameSync(part, `${part}.away`)
    const ran = await cli.run(args, { input: csv })
    const plain = await cli.run(args, { input: csv.replace('3*0.4 uV + 0.1 uV', '1.3 uV') })
    renameSync(`${part}.away`, part)
    expect(problemOf(ran)).toMatchObject({ code: 'arithmetic-unavailable', exit: 65 })
    expect(ran.stderr).toContain('arithmetic.mjs')
    expect(plain.code).toBe(0)
  })
})

describe('results', () => {
  test('each format says the same', async () => {
    const args = [
      'codes',
      '--design',
      'unipolar-18.design.json',
      '--points',
      'unipolar-18.points.csv',
      '--format',
    ]
    const [json, ndjson, csv, table] = await Promise.all(
      ['json', 'ndjson', 'csv', 'table'].map(async (format) => await cli.run([...args, format])),
    )
    expect(JSON.parse(ndjson?.stdout ?? '')).toEqual(JSON.parse(json?.stdout ?? ''))
    expect(ndjson?.stdout.trimEnd()).not.toContain('\n')
    expect(csv?.stdout).toMatch(
      /^range,verdict,gain_code,gain_word,offset_code,offset_word,.*\nu10,ok,2593,0xA21,2048,0x800,/,
    )
    expect(table?.stdout).toMatch(/Verdict {2}✓ ok/)
    expect(table?.stdout).toMatch(/^Code +2593 +2048$/m)
    expect(table?.stderr).toBe('Loading codes moves a live output. Make safe what it drives first.\n')
    expect(json?.stderr).toBe('')
  })

  test('points from a pipe that is named as a file, as a shell hands it over', async () => {
    const command = `'${process.execPath}' '${cli.path}' codes --design unipolar-18.design.json --points <(cat unipolar-18.points.csv)`
    const ran = await ended(spawn('bash', ['-c', command], { cwd: cli.folder }))
    expect(ran.code).toBe(0)
    expect(parsed(codesDocument, ran.stdout).trim.codes).toEqual({ gain: 2593, offset: 2048 })
  })

  test('effects are learned from the pass before', async () => {
    const args = ['codes', '--design', 'bipolar-16.design.json', '--points']
    const first = await cli.run([...args, 'bipolar-16.points.csv', '--applied', 'neutral'])
    put('first.json', first.stdout)
    put('record.json', JSON.stringify({ format: 'ogee.record/1', result: JSON.parse(first.stdout) }))
    const moved = read('bipolar-16.points.csv')
      .trim()
      .split('\n')
      .map((row, i) => {
        if (i === 0) return row
        const [code = '', measured = '', u = ''] = row.split(',')
        const ideal = -10 + (Number(code) * 20) / 65536
        // The codes took away nine tenths of the error: effects a tenth weaker than designed.
        return `${code},${ideal + (Number(measured) - ideal) / 10},${u}`
      })
      .join('\n')
    const { codes } = parsed(codesDocument, first.stdout).trim
    const second = [
      ...args,
      '-',
      '--applied',
      `gain=${codes?.gain},offset=${codes?.offset}`,
      '--effects',
      'learned',
      '--previous',
    ]
    const learned = await cli.run([...second, 'first.json'], { input: moved })
    const { effects } = parsed(codesDocument, learned.stdout).trim
    expect(effects.offset).toMatchObject({ source: 'learned' })
    expect(effects.offset?.factor).toBeCloseTo(0.9, 1)
    expect((await cli.run([...second, 'record.json'], { input: moved })).stdout).toBe(learned.stdout)
    const bad = await cli.run([...second, 'bipolar-16.design.json'], { input: moved })
    expect(problemOf(bad)).toMatchObject({ code: 'invalid-document', exit: 65 })
  })
})
