import type { Design } from '../../../shared/contract/design.ts'
import { isOgeeError, type OgeeError } from '../../../shared/errors.ts'
import { type Channel, prepareChannel } from '../../../shared/solver/channel.ts'
import type { PreviousPass } from '../../../shared/solver/learn.ts'
import { prepareTrim, type TrimChannel } from '../../../shared/solver/prepare-trim.ts'
import type { Applied, FitResult, TrimResult } from '../../../shared/solver/types.ts'

/** A design's range made ready once; `trim` is null, with the reason, when there are no codes to find. */
export type Bench = { channel: Channel; trim: TrimChannel | null; noTrim: OgeeError | null }

export function prepareBench(design: Design, rangeId: string): Bench {
  const channel = prepareChannel(design, rangeId)
  try {
    return { channel, trim: prepareTrim(design, rangeId), noTrim: null }
  } catch (error) {
    if (!isOgeeError(error)) throw error
    return { channel, trim: null, noTrim: error }
  }
}

export type Answer = { fit: FitResult; trim: TrimResult | null }

export type Solved =
  | { is: 'answer'; answer: Answer }
  /** Fewer than two codes so far: nothing is wrong, there is no line yet. */
  | { is: 'waiting' }
  | { is: 'refused'; error: OgeeError }

export type SolveOptions = { applied: Applied | null; previous: PreviousPass | null }
