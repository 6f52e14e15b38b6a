import type { Design } from '../../../shared/contract/design.ts'
import { isOgeeError, type OgeeError } from '../../../shared/errors.ts'
import { type Ladder, ladderOf } from '../../../shared/solver/sizing/ladder.ts'
import { sizeDesign } from '../../../shared/solver/sizing/size.ts'
import { resolutionSpanTable, type SpanTable } from '../../../shared/solver/sizing/span-table.ts'
import type { MeasuredUnits, SizeResult } from '../../../shared/solver/sizing/types.ts'

/** Everything that stands at the right of the form, of one range. */
export type Answer = {
  design: Design
  size: SizeResult
  fsrV: number
}

/** What is drawn of it. */
export type Pictures = { ladders: readonly Ladder[]; tables: readonly SpanTable[] }

const both = ['gain', 'offset'] as const

/** Measured units in the place of the budget's initial lines, fitted again where the design around them changes. */
export type Measured = {
  /** Of the file, or what else says where they come from. */
  name: string
  unitsFor: (design: Design, rangeId: string) => MeasuredUnits
}

/** The answer of the shared solver, or its refusal. */
export function answerOf(design: Design, rangeId: string, measured: Measured | null): Answer | OgeeError {
  try {
    const range = design.ranges.find(({ id }) => id === rangeId)!
    const measuredUnits = measured?.unitsFor(design, rangeId)
    const size = sizeDesign(design, { rangeId, measuredUnits })
    return { design, size, fsrV: range.highV - range.lowV }
  } catch (error) {
    if (isOgeeError(error)) return error
    throw error
  }
}

export function picturesOf({ design, size, fsrV }: Answer): Pictures {
  const rangeId = size.range
  return {
    ladders: both.flatMap((which) => ladderOf(size, which, fsrV) ?? []),
    tables: both.flatMap((which) => resolutionSpanTable(design, which, { rangeId }) ?? []),
  }
}
