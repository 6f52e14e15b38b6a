import { limits } from './limits.ts'

/** How an instrument's calibration stands: good, due within a month, or past its last day. */
export type CalibrationState = 'good' | 'soon' | 'overdue'

const dayMs = 86_400_000

/**
 * How a calibration stands at an instant. The due day itself is the last good one; days are UTC days, so that every
 * station and the server say the same.
 * @param dueOn the last day, `YYYY-MM-DD`
 * @param atMs milliseconds since 1970
 * @example calibrationState('2026-11-01', Date.parse('2026-11-01T23:59:59Z')) // 'soon'
 */
export function calibrationState(dueOn: string, atMs: number): CalibrationState {
  const endMs = Date.parse(`${dueOn}T00:00:00Z`) + dayMs
  if (atMs >= endMs) return 'overdue'
  return atMs >= endMs - (limits.calibrationSoonDays + 1) * dayMs ? 'soon' : 'good'
}

/** The one sentence about it, for screens and messages. */
export const overdueSentence = (id: string, dueOn: string): string => `${id} was due on ${dueOn}.`
