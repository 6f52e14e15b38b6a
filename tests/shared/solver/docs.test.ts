import { readFileSync } from 'node:fs'
import { describe, expect, test } from 'vitest'
import { computeCodes } from '../../../shared/solver/codes.ts'
import { fitChannel } from '../../../shared/solver/fit.ts'
import { takePoints } from '../../../shared/solver/points.ts'
import { prepareTrim } from '../../../shared/solver/prepare-trim.ts'
import { exampleDesign, examplePoints } from '../../support/solver-fixtures.ts'

/** Runs the `@example EXPRESSION // EXPECTED` of every docstring in shared/solver, quantity and points. */
const modules = import.meta.glob<Record<string, unknown>>(
  [
    '../../../shared/solver/*.ts',
    '../../../shared/solver/distribution/*.ts',
    '../../../shared/solver/lots/*.ts',
    '../../../shared/quantity/*.ts',
    '../../../shared/points/*.ts',
  ],
  { eager: true },
)

const unipolar18 = exampleDesign('unipolar-18')
const points = examplePoints('unipolar-18')
const { channel, trimmers } = prepareTrim(unipolar18)
const fixtures: Record<string, unknown> = {
  unipolar18,
  points,
  channel,
  trimmers,
  gain: trimmers.gain,
  range: channel.range,
  set: takePoints(points, channel.range, channel.rules),
  line: fitChannel(channel, points).line,
  result: computeCodes(unipolar18, points),
  load: () => import('../../../shared/quantity/arithmetic.ts'),
}
const scope: Record<string, unknown> = { ...fixtures }
for (const exported of Object.values(modules)) Object.assign(scope, exported)

async function run(code: string): Promise<unknown> {
  const names = Object.keys(scope)
  const body = new Function(...names, `return (async () => (${code}))()`) as (
    ...values: unknown[]
  ) => Promise<unknown>
  return body(...names.map((name) => scope[name]))
}

const examples = Object.keys(modules).flatMap((path) => {
  const text = readFileSync(new URL(path, import.meta.url), 'utf8')
  return [...text.matchAll(/@example (.+?) \/\/ (.+)\n/g)].map(([, code = '', expected = '']) => ({
    file: path.replace(/.*shared\//, ''),
    code,
    expected,
  }))
})

describe('docstring examples', () => {
  test('every @example has the form EXPRESSION // EXPECTED and is found', () => {
    const all = Object.keys(modules).flatMap((path) => {
      const text = readFileSync(new URL(path, import.meta.url), 'utf8')
      return [...text.matchAll(/@example/g)]
    })
    expect(examples.length).toBe(all.length)
    expect(examples.length).toBeGreaterThan(40)
  })

  test.each(examples)('$file: $code', async ({ code, expected }) => {
    const got = await run(code)
    if (expected.endsWith('...')) {
      expect(String(got).startsWith(expected.slice(0, -3))).toBe(true)
      return
    }
    const wanted = await run(expected)
    if (typeof wanted === 'number') expect(got).toBeCloseTo(wanted, 12)
    else expect(got).toEqual(wanted)
  })
})
