import { describe, expect, test } from 'vitest'
import { computeCodes } from '../../../shared/solver/codes.ts'
import { exampleDesign, exampleNames, examplePoints, vector } from '../../support/solver-fixtures.ts'

/** The worked examples (tests/vectors/examples), computed in exact rational arithmetic outside this project. */
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

/** "1e-9 relative or 1e-15 of FSR (offsets) or 1e-15 (gain), whichever is larger". */
function near(got: number, wanted: number, floor = 0): void {
  expect(Math.abs(got - wanted)).toBeLessThanOrEqual(Math.max(1e-9 * Math.abs(wanted), floor))
}

describe.each(exampleNames)('worked example %s', (name) => {
  const design = exampleDesign(name)
  const { fit, trim } = computeCodes(design, examplePoints(name), { applied: 'neutral' })
  const wanted = vector<Expected>(`examples/${name}.expected.json`)
  const { lowV, highV } = design.ranges[0]!
  const offsetFloor = 1e-15 * (highV - lowV)

  test('fit', () => {
    near(fit.offsetErrorV, wanted.fit.offsetErrorV, offsetFloor)
    near(fit.gainErrorPpm, wanted.fit.gainErrorPpm, 1e-9)
    near(fit.linearity.maxLsb, wanted.fit.maxResidualLsb)
    near(fit.standardUncertainty!.offsetV, wanted.fit.standardUncertainty.offsetV, offsetFloor)
    near(fit.standardUncertainty!.gainPpm, wanted.fit.standardUncertainty.gainPpm, 1e-9)
    if (wanted.fit.chiSquared === null) expect(fit.chiSquared).toBe(null)
    else near(fit.chiSquared!, wanted.fit.chiSquared)
  })

  test('codes, node voltages and what is out of reach', () => {
    expect(trim.codes).toEqual(wanted.codes)
    const perVolt = trim.effects.offset!.offsetPerV
    near(trim.exactNodeV.offset!, wanted.exactNodeV.offset, offsetFloor / Math.abs(perVolt))
    near(trim.exactNodeV.gain!, wanted.exactNodeV.gain)
    const short = Object.keys(trim.shortfall ?? {}).filter((key) => key !== 'remainingWorstV')
    expect(short).toEqual(wanted.outOfReach)
  })

  test('predicted line', () => {
    if (wanted.predicted === null) {
      expect(trim.predicted).toBe(null)
      return
    }
    near(trim.predicted!.offsetErrorV, wanted.predicted.offsetErrorV, offsetFloor)
    near(trim.predicted!.gainErrorPpm, wanted.predicted.gainErrorPpm, 1e-9)
    near(trim.predicted!.worstLsb, wanted.predicted.worstLsb)
  })
})
