import { expect, test } from 'vitest'
import { nodeV } from '../../../shared/solver/network.ts'
import { prepareTrim } from '../../../shared/solver/prepare-trim.ts'
import { unitError } from '../../../shared/solver/sizing/unit-error.ts'
import { pointsOnLine } from '../../support/solver-fixtures.ts'
import { handDesign } from './designs.ts'

test('codes loaded while measuring are taken out again', () => {
  const design = handDesign()
  const { trimmers } = prepareTrim(design)
  const { gain, offset } = trimmers
  const loaded = { gain: 3000, offset: 1000 }
  const o = 1e-4 + offset!.alpha * nodeV(offset!, loaded.offset)
  const g = 50e-6 + gain!.beta * nodeV(gain!, loaded.gain)
  const points = pointsOnLine(design, [0, 32768, 65535], o, g)
  const got = unitError(design, points, { applied: loaded })
  expect(got.offsetErrorV).toBeCloseTo(1e-4, 12)
  expect(got.gainErrorPpm).toBeCloseTo(50, 6)
  // Nothing loaded, nothing taken out.
  expect(unitError(design, pointsOnLine(design, [0, 65535], 1e-4, 50e-6)).gainErrorPpm).toBeCloseTo(50, 6)
})
