import type { Record } from '../../../shared/contract/record.ts'
import { isOgeeError } from '../../../shared/errors.ts'
import { appliedVoltages } from '../../../shared/solver/applied.ts'
import type { PreviousPass } from '../../../shared/solver/learn.ts'
import type { Applied } from '../../../shared/solver/types.ts'
import type { TrimRecord } from './queries.ts'
import { isSameApplied } from './search.ts'
import type { Bench } from './solve.ts'

/**
 * What the effects are learned from, as the server does it: the trim before; a verification only where it was measured
 * with other codes, since with the same ones nothing has moved.
 */
export function previousPass(
  followed: Record | null,
  trims: readonly TrimRecord[],
  applied: Applied | null,
  { trim }: Bench,
): PreviousPass | null {
  const before = trims.at(-1)?.result ?? null
  if (followed?.kind !== 'verify' || followed.result?.format !== 'ogee.verify/1') return before
  const { fit } = followed.result
  if (fit === null || trim === null || isSameApplied(followed.applied, applied)) return before
  try {
    const { gain, offset } = appliedVoltages(trim.trimmers, followed.applied ?? 'neutral')
    return { fit, trim: { appliedNodeV: { gain, offset } } }
  } catch (error) {
    // Codes of another revision that this one does not have: nothing to learn from here.
    if (isOgeeError(error)) return before
    throw error
  }
}
