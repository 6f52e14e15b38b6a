import fc from 'fast-check'
import { expect, test } from 'vitest'
import {
  errorIn,
  lsb,
  lsbOfVolts,
  ppm,
  ppmOfRatio,
  ppmOfVolts,
  ratioOfPpm,
  volt,
  voltsOfLsb,
  voltsOfPpm,
} from '../../shared/units.ts'

const scale = { fsrV: 10, lsbV: 10 / 65536 }

test('volts, LSB and ppm of FSR say the same error', () => {
  expect(lsbOfVolts(volt(scale.lsbV), scale)).toBe(1)
  expect(ppmOfVolts(volt(10e-6), scale)).toBeCloseTo(1, 12)
  expect(ratioOfPpm(ppm(350))).toBe(0.00035)
  expect(errorIn('LSB', volt(2 * scale.lsbV), scale)).toBe(2)
  expect(errorIn('ppm', volt(1e-3), scale)).toBeCloseTo(100, 10)
  expect(errorIn('V', volt(0.5), scale)).toBe(0.5)
})

test('there and back is the same to a unit of the last place', () => {
  fc.assert(
    fc.property(fc.double({ min: -1e6, max: 1e6, noNaN: true }), (v) => {
      expect(lsbOfVolts(voltsOfLsb(lsb(v), scale), scale)).toBeCloseTo(v, 8)
      expect(ppmOfVolts(voltsOfPpm(ppm(v), scale), scale)).toBeCloseTo(v, 8)
      expect(ppmOfRatio(ratioOfPpm(ppm(v)))).toBeCloseTo(v, 8)
    }),
  )
})
