import type { Design } from '../../../shared/contract/design.ts'
import type { Point } from '../../../shared/contract/point.ts'
import { isOgeeError } from '../../../shared/errors.ts'
import type { VerifyResult } from '../../../shared/solver/types.ts'
import { verifyPoints } from '../../../shared/solver/verify.ts'
import type { Bench } from './solve.ts'

/** The decision per point, where the design states a tolerance; null where it cannot be judged. */
export function judge(design: Design, bench: Bench, points: readonly Point[]): VerifyResult | null {
  if (points.length === 0 || !design.decision) return null
  return quietly(() => verifyPoints(design, points, { rangeId: bench.channel.range.id }))
}

/** U of each point for the plots, whether or not the design judges: the simple rule asks for nothing. */
export function barsOf(design: Design, bench: Bench, points: readonly Point[]): VerifyResult | null {
  if (points.length === 0) return null
  const judged: Design = { ...design, decision: { rule: 'simple', tolerance: design.target.residual } }
  return quietly(() => verifyPoints(judged, points, { rangeId: bench.channel.range.id }))
}

function quietly<T>(run: () => T): T | null {
  try {
    return run()
  } catch (error) {
    if (isOgeeError(error)) return null
    throw error
  }
}
