import { readFileSync } from 'node:fs'
import { describe, expect, test } from 'vitest'
import { type NetworkRequest, wantedOf } from '../../../shared/solver/network-synthesis/request.ts'
import { prepareTrim } from '../../../shared/solver/prepare-trim.ts'
import { budgetTerms } from '../../../shared/solver/sizing/budget.ts'
import { ladderOf } from '../../../shared/solver/sizing/ladder.ts'
import { measuredUnits } from '../../../shared/solver/sizing/measured-units.ts'
import { sizeDesign } from '../../../shared/solver/sizing/size.ts'
import { sizingExample } from './designs.ts'

/** Runs the `@example EXPRESSION // EXPECTED` of every docstring in sizing, networks, yield, random and design-words. */
const modules = import.meta.glob<Record<string, unknown>>(
  [
    '../../../shared/solver/sizing/*.ts',
    '../../../shared/solver/network-synthesis/*.ts',
    '../../../shared/solver/yield/*.ts',
    '../../../shared/solver/random/*.ts',
    '../../../shared/design-words/*.ts',
  ],
  { eager: true },
)

const unipolar18 = sizingExample('unipolar-18')
const { channel, trimmers } = prepareTrim(unipolar18)
const request: NetworkRequest = {
  wantedLowV: -0.29296875,
  wantedHighV: 0.29296875,
  series: 'E96',
  tolerance: 0.001,
  maxSourceOhm: 2000,
  maxCurrentA: 500e-6,
}
const size = sizeDesign(unipolar18)
const scope: Record<string, unknown> = {}
for (const exported of Object.values(modules)) Object.assign(scope, exported)
Object.assign(scope, {
  unipolar18,
  design: unipolar18,
  channel,
  trimmers,
  range: channel.range,
  terms: budgetTerms(unipolar18),
  units: measuredUnits([1, 2, 3].map((i) => ({ offsetErrorV: i * 1e-6, gainErrorPpm: i }))),
  request,
  wanted: wantedOf(unipolar18, 'gain', request),
  size,
  ladder: ladderOf(size, 'gain', 10),
})

function run(code: string): unknown {
  const names = Object.keys(scope)
  const body = new Function(...names, `return (${code})`) as (...values: unknown[]) => unknown
  return body(...names.map((name) => scope[name]))
}

const texts = Object.keys(modules).map((path) => ({
  file: path.replace(/.*shared\//, ''),
  text: readFileSync(new URL(path, import.meta.url), 'utf8'),
}))
const examples = texts.flatMap(({ file, text }) =>
  [...text.matchAll(/@example (.+?) \/\/ (.+)\n/g)].map(([, code = '', expected = '']) => ({
    file,
    code,
    expected,
  })),
)

describe('docstring examples', () => {
  test('every @example has the form EXPRESSION // EXPECTED', () => {
    const all = texts.flatMap(({ text }) => [...text.matchAll(/@example/g)])
    expect(examples.length).toBe(all.length)
    expect(examples.length).toBeGreaterThan(20)
  })

  test.each(examples)('$file: $code', ({ code, expected }) => {
    const got = run(code)
    if (expected.endsWith('...')) {
      expect(String(got).startsWith(expected.slice(0, -3))).toBe(true)
      return
    }
    const wanted = run(expected.replace(/(\d)\.\.\./g, '$1'))
    if (typeof wanted === 'number') expect(got).toBeCloseTo(wanted, 9)
    else expect(got).toEqual(wanted)
  })
})
