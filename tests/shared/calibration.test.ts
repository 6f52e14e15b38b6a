import { expect, test } from 'vitest'
import { calibrationState } from '../../shared/calibration.ts'

test.each([
  ['2026-11-01T23:59:59.999Z', 'soon'],
  ['2026-11-02T00:00:00Z', 'overdue'],
  // The same instant, however it is written.
  ['2026-11-02T00:59:59+01:00', 'soon'],
  ['2026-10-02T00:00:00Z', 'soon'],
  ['2026-10-01T23:59:59Z', 'good'],
  ['2030-01-01T00:00:00Z', 'overdue'],
] as const)('due on 2026-11-01, at %s: %s', (at, state) => {
  expect(calibrationState('2026-11-01', Date.parse(at))).toBe(state)
})
