import type { Design } from '../contract/design.ts'
import type { DesignAnswer, DesignEffect } from '../contract/revisions.ts'
import { verdictWords } from '../design-words/verdict-sentences.ts'
import { bitsWord, nameOf, span, volts } from '../design-words/words.ts'
import { OgeeError } from '../errors.ts'
import { engineering } from '../quantity/format.ts'
import { sizeDesign } from '../solver/sizing/size.ts'
import type { AdjusterSize } from '../solver/sizing/types.ts'

type Sized = Extract<DesignAnswer, { sized: true }>
type AdjusterAnswer = NonNullable<Sized['adjusters']['gain']>

/** What the differences do to the answer, range by range. Both designs are sized by the same solver. */
export function effectsOf(before: Design, after: Design): DesignEffect[] {
  const ids = new Set([...after.ranges, ...before.ranges].map((range) => range.id))
  return [...ids].map((range) => {
    const was = answerOf(before, range)
    const is = answerOf(after, range)
    return { range, before: was, after: is, sentences: sentencesOf(range, was, is) }
  })
}

/** The numbers of a sizing that a reviewer asks for; or why it cannot be sized; null without such a range. */
export function answerOf(design: Design, rangeId: string): DesignAnswer | null {
  if (!design.ranges.some((range) => range.id === rangeId)) return null
  try {
    const { verdict, adjusters, targetV, residual } = sizeDesign(design, { rangeId })
    return {
      sized: true,
      verdict,
      adjusters: {
        ...(adjusters.gain ? { gain: adjusterAnswer(adjusters.gain) } : {}),
        ...(adjusters.offset ? { offset: adjusterAnswer(adjusters.offset) } : {}),
      },
      targetV,
      worstResidualV: residual.worstCaseV,
      worstResidualLsb: residual.worstCaseLsb,
    }
  } catch (error) {
    if (!(error instanceof OgeeError)) throw error
    return { sized: false, code: error.code, detail: error.message }
  }
}

function adjusterAnswer(size: AdjusterSize): AdjusterAnswer {
  const { verdict, requiredBits, available, reachMargin, stepMargin } = size
  const { bits, lowV, highV } = available
  return { verdict, requiredBits, bits, lowV, highV, reachMargin, stepMargin }
}

function sentencesOf(range: string, was: DesignAnswer | null, is: DesignAnswer | null): string[] {
  if (!was) return [`Range ${range} is new.`, ...(is?.sized === false ? [unsized(is)] : [])]
  if (!is) return [`Range ${range} is gone.`]
  if (!is.sized) return was.sized || was.detail !== is.detail ? [unsized(is)] : []
  if (!was.sized) return [`Can be sized now: ${verdictWords[is.verdict]}.`]
  return [
    ...(['gain', 'offset'] as const).flatMap((which) =>
      adjusterSentences(nameOf(which), was.adjusters[which], is.adjusters[which]),
    ),
    ...moved('Target', volts(was.targetV), volts(is.targetV)),
    ...moved('Worst residual', residualText(was), residualText(is)),
  ]
}

const unsized = ({ detail }: { detail: string }) => `Cannot be sized: ${detail}`

function adjusterSentences(name: string, was?: AdjusterAnswer, is?: AdjusterAnswer): string[] {
  if (!was && !is) return []
  if (!was) return [`${name} adjuster is new: ${verdictWords[is!.verdict]}.`]
  if (!is) return [`${name} adjuster is gone.`]
  return [
    ...moved(name, verdictWords[was.verdict], verdictWords[is.verdict]),
    ...moved(`${name} needs`, bitsWord(was.requiredBits), bitsWord(is.requiredBits)),
    ...moved(`${name} has`, bitsWord(was.bits), bitsWord(is.bits)),
    ...moved(`${name} spans`, span(was.lowV, was.highV), span(is.lowV, is.highV)),
  ]
}

const moved = (what: string, was: string, is: string): string[] =>
  was === is ? [] : [`${what} ${is}, before ${was}.`]

const residualText = ({ worstResidualV, worstResidualLsb }: Sized) =>
  `${volts(worstResidualV)} (${engineering(worstResidualLsb, 'LSB')})`
