import { mkdirSync, readFileSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { beforeAll, expect, test } from 'vitest'
import { networkDocument } from '../../shared/contract/network.ts'
import { sizeDocument } from '../../shared/contract/size.ts'
import { builtCli, examples, problemOf } from './support/built-cli.ts'

/** The bad inputs of the issue on sizing, each refused by `ogee size` with 65 and its path in the document. */
const cli = builtCli()

type Json = Record<string, unknown>
function design(name: string, changes: Readonly<Record<string, unknown>>): string {
  const document = JSON.parse(readFileSync(join(examples, 'unipolar-18.design.json'), 'utf8')) as Json
  for (const [at, value] of Object.entries(changes)) {
    const keys = at.split('/')
    let here: Json = document
    for (const key of keys.slice(0, -1)) here = here[key] as Json
    if (value === undefined) delete here[keys.at(-1)!]
    else here[keys.at(-1)!] = value
  }
  writeFileSync(join(cli.folder, name), JSON.stringify(document))
  return name
}

beforeAll(() => {
  mkdirSync(cli.folder, { recursive: true })
})

const measured = (slopePerV: number, offsetPerV: number) => ({ kind: 'measured', slopePerV, offsetPerV })
const cases: [string, Readonly<Record<string, unknown>>, string][] = [
  ['an effect of zero', { 'adjusters/gain/effect': measured(0, 0) }, '/adjusters/gain/effect'],
  [
    'a negative resistance',
    { 'adjusters/offset/effect/adjustOhm': -1e6 },
    '/adjusters/offset/effect/adjustOhm',
  ],
  ['a negative limit', { 'budget/gain/0/limitPpm': -5 }, '/budget/gain/0/limitPpm'],
  [
    'adjusters that move the same thing',
    { 'adjusters/gain/effect': measured(0, 0.01), 'adjusters/offset/effect': measured(0, 0.02) },
    '/adjusters',
  ],
  ['an empty budget', { budget: { gain: [], offset: [] } }, '/budget'],
  ['τ of 1', { 'adjusters/gain/effectTolerance': 1 }, '/adjusters/gain/effectTolerance'],
  ['a range reversed', { 'ranges/0/lowV': 10, 'ranges/0/highV': 0 }, '/ranges/0/highV'],
  [
    'a node reversed',
    { 'adjusters/gain/node/minV': 5, 'adjusters/gain/node/maxV': -5 },
    '/adjusters/gain/node/maxV',
  ],
  ['a DAC that spans nothing', { 'adjusters/gain/source/highV': -2.5 }, '/adjusters/gain/source/highV'],
  ['converter bits out of bounds', { 'converter/bits': 25 }, '/converter/bits'],
  ['auxiliary bits out of bounds', { 'adjusters/gain/source/bits': 0 }, '/adjusters/gain/source/bits'],
  ['a document of another version', { format: 'ogee.design/2' }, '/format'],
]

test.each(cases)('%s', async (name, changes, path) => {
  const file = design(`${name.replaceAll(/\W+/g, '-')}.json`, changes)
  const ran = await cli.run(['size', '--design', file, '--format', 'json'])
  expect([ran.code, ran.stdout]).toEqual([65, ''])
  const { exit, errors } = problemOf(ran) as unknown as { exit: number; errors: { path: string }[] }
  expect([exit, errors[0]?.path]).toEqual([65, path])
})

test('a node limit inside the needed reach is an answer, with a remark at its place', async () => {
  const ran = await cli.run(['size', '--design', design('node.json', { 'adjusters/gain/node/maxV': 0.1 })])
  expect(ran.code).toBe(10)
  expect(sizeDocument.parse(JSON.parse(ran.stdout)).remarks).toMatchObject([
    { path: '/adjusters/gain/node/maxV', message: expect.stringContaining('inside the needed reach') },
  ])
})

test('a series that cannot meet the request: the nearest, and what stands in the way', async () => {
  const file = design('series.json', {})
  const asked = ['--adjuster', 'gain', '--series', 'E24', '--max-source', '10 ohm', '--max-current', '1 uA']
  const ran = await cli.run(['network', '--design', file, ...asked])
  const { candidates, obstacle } = networkDocument.parse(JSON.parse(ran.stdout))
  expect(candidates).toHaveLength(1)
  expect(obstacle).toMatch(/The nearest has /)
})

test('10,000 budget lines, at the contract’s bounds, are sized', async () => {
  const lines = Array.from({ length: 10_000 }, (_, i) => ({
    name: `L${i}`,
    limitPpm: 0.01,
    distribution: 'rectangular',
    when: 'initial',
  }))
  const ran = await cli.run(['size', '--design', design('many.json', { 'budget/gain': lines })])
  expect(sizeDocument.parse(JSON.parse(ran.stdout)).extents.gain.worstCasePpm).toBeCloseTo(100, 9)
})
