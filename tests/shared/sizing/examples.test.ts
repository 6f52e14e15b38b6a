import { describe, expect, expectTypeOf, test } from 'vitest'
import type { Design as StoredDesign } from '../../../shared/contract/design.ts'
import { designDocument } from '../../../shared/contract/design.ts'
import { type SizeDocument, sizeDocument } from '../../../shared/contract/size.ts'
import { sizeDesign } from '../../../shared/solver/sizing/size.ts'
import type { SizeResult, SizingDesign } from '../../../shared/solver/sizing/types.ts'
import { exampleNames, vector } from '../../support/solver-fixtures.ts'
import { sizingExample } from './designs.ts'

/** The `size.*` part of the worked examples, computed in exact rational arithmetic outside this project. */
type Wanted = Record<
  | 'requiredLowV'
  | 'requiredHighV'
  | 'requiredStepV'
  | 'requiredBits'
  | 'availableLowV'
  | 'availableHighV'
  | 'availableStepV',
  number
>
type Expected = { size: { gain: Wanted; offset: Wanted }; targetV: number }

function near(got: number, wanted: number): void {
  expect(Math.abs(got - wanted)).toBeLessThanOrEqual(1e-9 * Math.abs(wanted))
}

describe.each(exampleNames)('worked example %s', (name) => {
  const expected = vector<Expected>(`examples/${name}.expected.json`)
  const result = sizeDesign(sizingExample(name))

  test.each(['gain', 'offset'] as const)('%s', (which) => {
    const size = result.adjusters[which]!
    const wanted = expected.size[which]
    near(size.requiredLowV, wanted.requiredLowV)
    near(size.requiredHighV, wanted.requiredHighV)
    near(size.requiredStepV, wanted.requiredStepV)
    expect(size.requiredBits).toBe(wanted.requiredBits)
    near(size.available.lowV, wanted.availableLowV)
    near(size.available.highV, wanted.availableHighV)
    near(size.available.stepV, wanted.availableStepV)
    expect(size.verdict).toBe('covers')
  })

  test('target, schema, and that stored and raw documents give the same numbers', () => {
    near(result.targetV, expected.targetV)
    expect(sizeDocument.parse(result)).toEqual(result)
    const stored = designDocument.parse(sizingExample(name))
    expect(sizeDesign(stored)).toEqual(result)
  })
})

test('types: stored documents go in, results are what the contract answers', () => {
  expectTypeOf<StoredDesign>().toExtend<SizingDesign>()
  expectTypeOf<SizeResult>().toExtend<SizeDocument>()
})
