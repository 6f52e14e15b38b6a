import type { Design } from '../../../shared/contract/design.ts'
import type { Point } from '../../../shared/contract/point.ts'
import type { Record as TrimRecord } from '../../../shared/contract/record.ts'
import { isOgeeError } from '../../../shared/errors.ts'
import { canonicalText } from '../../../shared/ledger/canonical.ts'
import { appliedVoltages } from '../../../shared/solver/applied.ts'
import { computeCodes } from '../../../shared/solver/codes.ts'
import type { PreviousPass } from '../../../shared/solver/learn.ts'
import { prepareTrim } from '../../../shared/solver/prepare-trim.ts'
import { verifyPoints } from '../../../shared/solver/verify.ts'
import { SOLVER_VERSION } from '../../../shared/solver/version.ts'

export type Row = { name: string; stored: number | null; now: number | null; unit: string; decimals: number }
export type Recomputed =
  | { is: 'done'; rows: Row[]; storedVerdict: string; verdict: string; storedSolver: string; solver: string }
  | { is: 'not-done'; why: string }

type Result = NonNullable<TrimRecord['result']>

/**
 * The solver of this page on the stored points under the stored revision. Nothing of the stored result goes in; where
 * effects were learned, the result of the pass before does: `earlier` are the records that this one follows, oldest first.
 */
export function recompute(
  record: TrimRecord,
  design: Design,
  earlier: readonly TrimRecord[] = [],
): Recomputed {
  const { result, points } = record
  if (result === null || points === null) return { is: 'not-done', why: 'This record has no points.' }
  try {
    const now = solveAgain(record, design, points, earlier)
    return {
      is: 'done',
      rows: rowsOf(result, now),
      storedVerdict: verdictOf(result),
      verdict: verdictOf(now),
      storedSolver: result.solver,
      solver: SOLVER_VERSION,
    }
  } catch (error) {
    if (!isOgeeError(error)) throw error
    return { is: 'not-done', why: `The solver refuses the stored points: ${error.message}` }
  }
}

function solveAgain(
  record: TrimRecord,
  design: Design,
  points: readonly Point[],
  earlier: readonly TrimRecord[],
): Result {
  const limits = record.instrument ?? record.result?.fit?.instrument
  const options = {
    rangeId: record.range,
    // The limits that were in force then, copied into the record; without any, the design's.
    ...(limits ? { instrument: limits } : {}),
  }
  if (record.kind === 'verify') return verifyPoints(design, points, options) as Result
  const learned = record.effects === 'learned' ? passBefore(record, design, earlier) : undefined
  return computeCodes(design, points, { ...options, learned, applied: record.applied ?? undefined }) as Result
}

/** A verification measured with the same codes shows no move, so the measurement that it stands on teaches. */
function passBefore(
  record: TrimRecord,
  design: Design,
  earlier: readonly TrimRecord[],
): PreviousPass | undefined {
  const before = [...earlier].reverse()
  const sameCodes = (one: TrimRecord) => canonicalText(one.applied) === canonicalText(record.applied)
  const teacher = before.find((one) => !(one.kind === 'verify' && sameCodes(one))) ?? before.at(-1)
  const result = teacher?.result
  if (!teacher || !result) return undefined
  if (result.format === 'ogee.codes/1') return result
  if (result.fit === null) return undefined
  const { trimmers } = prepareTrim(design, record.range)
  const { gain, offset } = appliedVoltages(trimmers, teacher.applied ?? 'neutral')
  return { fit: result.fit, trim: { appliedNodeV: { gain, offset } } }
}

const verdictOf = (result: Result) =>
  result.format === 'ogee.codes/1' ? result.trim.verdict : result.outcome

type Read = (result: Result) => number | null | undefined
const quantities: { name: string; unit: string; decimals: number; factor: number; read: Read }[] = [
  { name: 'Offset error', unit: 'µV', decimals: 2, factor: 1e6, read: (r) => r.fit?.offsetErrorV },
  { name: 'Gain error', unit: 'ppm', decimals: 3, factor: 1, read: (r) => r.fit?.gainErrorPpm },
  { name: 'Linearity seen', unit: 'LSB', decimals: 4, factor: 1, read: (r) => r.fit?.linearity.maxLsb },
  {
    name: 'Worst',
    unit: 'LSB',
    decimals: 4,
    factor: 1,
    read: (r) => (r.format === 'ogee.codes/1' ? r.trim.predicted?.worstLsb : r.worst.errorLsb),
  },
  { name: 'Gain code', unit: '', decimals: 0, factor: 1, read: (r) => codesOf(r)?.gain },
  { name: 'Offset code', unit: '', decimals: 0, factor: 1, read: (r) => codesOf(r)?.offset },
]

const codesOf = (result: Result) => (result.format === 'ogee.codes/1' ? result.trim.codes : null)

function rowsOf(stored: Result, now: Result): Row[] {
  return quantities.flatMap(({ name, unit, decimals, factor, read }) => {
    const before = read(stored) ?? null
    const after = read(now) ?? null
    if (before === null && after === null) return []
    const shown = (value: number | null) => (value === null ? null : value * factor)
    return [{ name, unit, decimals, stored: shown(before), now: shown(after) }]
  })
}
