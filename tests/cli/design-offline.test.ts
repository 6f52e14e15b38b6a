import { copyFileSync, mkdirSync, readFileSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { beforeAll, describe, expect, test } from 'vitest'
import { networkDocument } from '../../shared/contract/network.ts'
import { sizeDocument } from '../../shared/contract/size.ts'
import { yieldDocument } from '../../shared/contract/yield.ts'
import { builtCli, examples, problemOf } from './support/built-cli.ts'

/** `ogee size`, `network` and `yield`: documents, exits of verdicts and of trouble, every format. */
const cli = builtCli()

type Json = Record<string, unknown>
function design(name: string, change: (document: Json) => void): string {
  const document = JSON.parse(readFileSync(join(examples, 'unipolar-18.design.json'), 'utf8')) as Json
  change(document)
  writeFileSync(join(cli.folder, name), JSON.stringify(document))
  return name
}
const set = (at: string, value: unknown) => (document: Json) => {
  const keys = at.split('/')
  let here: Record<string, unknown> = document
  for (const key of keys.slice(0, -1)) here = here[key] as Record<string, unknown>
  here[keys.at(-1)!] = value
}

beforeAll(() => {
  mkdirSync(cli.folder, { recursive: true })
  copyFileSync(join(examples, 'unipolar-18.design.json'), join(cli.folder, 'design.json'))
})

describe('ogee size', () => {
  test('the example covers, and the document is that of the contract', async () => {
    const { code, stdout, stderr } = await cli.run(['size', '--design', 'design.json'])
    expect([code, stderr]).toEqual([0, ''])
    const document = sizeDocument.parse(JSON.parse(stdout))
    expect(document.adjusters.gain).toMatchObject({ requiredBits: 10, verdict: 'covers', spareBits: 2 })
  })

  test.each([
    ['short', 'adjusters/gain/network/bottomOhm', 330, 10],
    ['coarse', 'adjusters/gain/source/bits', 8, 11],
    ['node limit', 'adjusters/gain/node/maxV', 0.1, 10],
  ])('%s ends with its code', async (name, at, value, exit) => {
    const { code, stdout } = await cli.run(['size', '--design', design(`${name}.json`, set(at, value))])
    expect(code).toBe(exit)
    expect(sizeDocument.parse(JSON.parse(stdout)).verdict).toBe(name === 'coarse' ? 'coarse' : 'short')
  })

  test('both is out of reach first', async () => {
    const file = design('both.json', (document) => {
      set('adjusters/gain/source/bits', 8)(document)
      set('adjusters/gain/network/bottomOhm', 330)(document)
    })
    expect((await cli.run(['size', '--design', file])).code).toBe(10)
  })

  test('bad input is 65 with its path', async () => {
    const file = design('empty.json', (d) => void delete (d as { budget?: unknown }).budget)
    const ran = await cli.run(['size', '--design', file])
    expect([ran.code, ran.stdout]).toEqual([65, ''])
    expect(problemOf(ran)).toMatchObject({ exit: 65, errors: [{ path: '/budget' }] })
  })

  test('from measured units: several files, codes loaded while measuring taken out again', async () => {
    const { stdout: points } = await cli.run([
      'simulate',
      '--design',
      'design.json',
      '--units',
      '20',
      '--seed',
      '7',
    ])
    const [head = '', ...rows] = points.trimEnd().split('\n')
    const half = rows.findIndex((row) => row.startsWith('S000011'))
    writeFileSync(join(cli.folder, 'a.csv'), [head, ...rows.slice(0, half), ''].join('\n'))
    writeFileSync(join(cli.folder, 'b.csv'), [head, ...rows.slice(half), ''].join('\n'))
    const { code, stdout } = await cli.run(['size', '--design', 'design.json', '--points', 'a.csv', 'b.csv'])
    const { extents } = sizeDocument.parse(JSON.parse(stdout))
    // Their spread by the tolerance factor asks for more reach than the budget does.
    expect([code, extents.from, extents.units]).toEqual([10, 'measured-units', 20])
    const piped = await cli.run(['size', '--design', 'design.json', '--points', '-'], { input: points })
    expect(JSON.parse(piped.stdout)).toEqual(JSON.parse(stdout))
  })

  test('one unit shows no spread', async () => {
    writeFileSync(join(cli.folder, 'one.csv'), 'unit,code,measured\n1,0,0\n1,262143,9.9999\n')
    const ran = await cli.run(['size', '--design', 'design.json', '--points', 'one.csv'])
    expect(ran.code).toBe(65)
    expect(problemOf(ran).detail).toContain('two are the least')
  })

  test('table and csv', async () => {
    const table = await cli.run(['size', '--design', 'design.json', '--format', 'table'])
    expect(table.stdout).toContain(
      '12 bits over ±367 mV: reaches 25 % past what the budget asks, steps 5.1 times finer',
    )
    expect(table.stdout).toContain('Reference drift')
    const csv = await cli.run(['size', '--design', 'design.json', '--format', 'csv'])
    expect(csv.stdout.split('\n').map((line) => line.split(',').slice(0, 2).join(','))).toEqual([
      'adjuster,verdict',
      'gain,covers',
      'offset,covers',
      '',
    ])
  })
})

describe('ogee network', () => {
  const args = (...more: string[]) => [
    'network',
    '--design',
    'design.json',
    '--adjuster',
    'gain',
    '--series',
    'E96',
    ...more,
  ]

  test('the contract’s call', async () => {
    const { code, stdout, stderr } = await cli.run(
      args('--tolerance', '0.1%', '--max-source', '5kohm', '--max-current', '500uA'),
    )
    expect([code, stderr]).toEqual([0, ''])
    const document = networkDocument.parse(JSON.parse(stdout))
    expect(document).toMatchObject({
      tolerance: 0.001,
      maxSourceOhm: 5000,
      maxCurrentA: 500e-6,
      obstacle: null,
    })
    expect(document.candidates.length).toBe(10)
  })

  test('tolerance of the series when none is given', async () => {
    expect(JSON.parse((await cli.run(args())).stdout)).toMatchObject({ tolerance: 0.01 })
  })

  test('what cannot be met: the nearest, the obstacle, 10', async () => {
    const { code, stdout } = await cli.run(
      args('--max-source', '100 ohm', '--max-current', '100uA', '--format', 'table'),
    )
    expect(code).toBe(10)
    expect(stdout).toContain('Obstacle')
    expect(stdout).toContain('nearest')
  })

  test('a wrong unit, an unknown series, an absent adjuster', async () => {
    const unit = await cli.run(args('--max-source', '5 V'))
    expect(unit.code).toBe(65)
    expect(problemOf(unit).detail).toContain('voltage')
    expect(
      (await cli.run(['network', '--design', 'design.json', '--adjuster', 'gain', '--series', 'E97'])).code,
    ).toBe(64)
    const file = design(
      'offset-only.json',
      (d) => void delete (d as { adjusters: { gain?: unknown } }).adjusters.gain,
    )
    expect((await cli.run(['network', '--design', file, '--adjuster', 'gain', '--series', 'E96'])).code).toBe(
      65,
    )
  })
})

describe('ogee yield', () => {
  const args = (...more: string[]) => ['yield', '--design', 'design.json', '--trials', '3000', ...more]

  test('the document, and the same again from the same seed', async () => {
    const first = await cli.run(args('--seed', '5'))
    expect([first.code, first.stderr]).toEqual([0, ''])
    const document = yieldDocument.parse(JSON.parse(first.stdout))
    expect(document).toMatchObject({ seed: 5, trials: 3000, stopped: false, effects: 'design' })
    expect(document.passes.length).toBe(2)
    expect((await cli.run(args('--seed', '5'))).stdout).toBe(first.stdout)
    expect((await cli.run(args('--seed', '6'))).stdout).not.toBe(first.stdout)
  })

  test('table, csv, ndjson', async () => {
    expect((await cli.run(args('--format', 'table'))).stdout).toMatch(/95 % interval/)
    expect((await cli.run(args('--format', 'csv'))).stdout.split('\n').length).toBe(4)
    const lines = (await cli.run(args('--format', 'ndjson', '--passes', '3'))).stdout.trimEnd().split('\n')
    expect(lines.map((line) => (JSON.parse(line) as { pass: number }).pass)).toEqual([1, 2, 3])
  })

  test('usage and bad input', async () => {
    expect((await cli.run(args('--passes', '10'))).code).toBe(64)
    expect((await cli.run(['yield', '--design', 'design.json', '--trials', '0'])).code).toBe(64)
    const file = design('no-decision.json', (d) => void delete (d as { decision?: unknown }).decision)
    const ran = await cli.run(['yield', '--design', file, '--trials', '10'])
    expect(ran.code).toBe(65)
    expect(problemOf(ran)).toMatchObject({ errors: [{ path: '/decision' }] })
  })
})
