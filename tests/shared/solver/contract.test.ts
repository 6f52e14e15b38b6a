import { readdirSync, readFileSync } from 'node:fs'
import { join } from 'node:path'
import { describe, expect, expectTypeOf, test } from 'vitest'
import {
  type CodesDocument,
  codesDocument,
  type FitDocument,
  fitDocument,
} from '../../../shared/contract/codes.ts'
import { designDocument, type Design as StoredDesign } from '../../../shared/contract/design.ts'
import type { Point } from '../../../shared/contract/point.ts'
import { type VerifyDocument, verifyDocument } from '../../../shared/contract/verify.ts'
import { computeCodes } from '../../../shared/solver/codes.ts'
import { fitPoints } from '../../../shared/solver/fit.ts'
import type * as Solver from '../../../shared/solver/types.ts'
import { verifyPoints } from '../../../shared/solver/verify.ts'
import { exampleDesign, exampleNames, examplePoints } from '../../support/solver-fixtures.ts'

const folder = join(import.meta.dirname, '../../../shared/solver')
const sources = readdirSync(folder, { recursive: true, encoding: 'utf8' }).filter((name) =>
  name.endsWith('.ts'),
)

describe('the solver keeps the contract', () => {
  test('stored documents are assignable to what the solver reads, and its results to what the contract answers', () => {
    expectTypeOf<StoredDesign>().toExtend<Solver.Design>()
    expectTypeOf<Point>().toExtend<Solver.MeasuredPoint>()
    expectTypeOf<Solver.FitDocument>().toExtend<FitDocument>()
    expectTypeOf<Solver.CodesResult>().toExtend<CodesDocument>()
    expectTypeOf<Solver.VerifyResult>().toExtend<VerifyDocument>()
    // A stored result teaches the next pass.
    expectTypeOf<CodesDocument['fit']>().toExtend<Solver.FitResult>()
  })

  test.each(exampleNames)('results for %s pass the schemas, and design defaults change no number', (name) => {
    const raw = exampleDesign(name)
    const design = designDocument.parse(raw)
    const points = examplePoints(name)
    const codes = computeCodes(design, points, { applied: 'neutral' })
    expect(codesDocument.parse(codes).trim.verdict).toBe(codes.trim.verdict)
    expect(fitDocument.parse(fitPoints(design, points)).fit).toEqual(codes.fit)
    const told = points.map((point) => ({ ...point, uncertainty: 1e-6 }))
    expect(verifyDocument.parse(verifyPoints(design, told)).outcome).toBe('fail')
    expect(computeCodes(raw, points, { applied: 'neutral' })).toEqual(codes)
  })

  test('nothing but + - * / and square root: functions that engines may round differently are not used', () => {
    const used = sources.flatMap((name) => {
      const text = readFileSync(join(folder, name), 'utf8').replace(/\/\*[\s\S]*?\*\/|\/\/.*|'[^'\n]*'/g, '')
      const calls = text.match(
        /\*\*|Math\.(?!abs|sqrt|floor|ceil|round|trunc|imul|min|max|PI|SQRT2|SQRT1_2|LN2)\w+|new Date|Date\.now/g,
      )
      return (calls ?? []).map((call) => `${name}: ${call}`)
    })
    expect(sources.length).toBeGreaterThan(30)
    expect(used).toEqual([])
  })
})
