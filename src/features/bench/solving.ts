import type { Point } from '../../../shared/contract/point.ts'
import { isOgeeError } from '../../../shared/errors.ts'
import { codesOn } from '../../../shared/solver/codes.ts'
import { fitChannel } from '../../../shared/solver/fit.ts'
import type { Bench, Solved, SolveOptions } from './solve.ts'

/** Fit and codes of what is measured. Without knowing what was applied there is a fit and no code. */
export function solve(bench: Bench, points: readonly Point[], options: SolveOptions): Solved {
  if (points.length === 0) return { is: 'waiting' }
  try {
    if (bench.trim === null || options.applied === null) {
      return { is: 'answer', answer: { fit: fitChannel(bench.channel, points).result, trim: null } }
    }
    const { fit, trim } = codesOn(bench.trim, points, {
      applied: options.applied,
      ...(options.previous ? { learned: options.previous } : {}),
    })
    return { is: 'answer', answer: { fit, trim } }
  } catch (error) {
    if (!isOgeeError(error)) throw error
    return error.code === 'too-few-codes' ? { is: 'waiting' } : { is: 'refused', error }
  }
}
