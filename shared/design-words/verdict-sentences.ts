import { log2 } from '../solver/sizing/bits.ts'
import type { AdjusterSize, SizeResult, SizeVerdict } from '../solver/sizing/types.ts'
import type { Adjuster, PerAdjuster, Which } from '../solver/types.ts'
import { reachRemedy } from './reach-remedy.ts'
import { bitsAmount, bitsWord, past, span, times, volts } from './words.ts'

export const verdictWords: Readonly<Record<SizeVerdict, string>> = {
  covers: 'covers',
  short: 'short of reach',
  coarse: 'too coarse',
  both: 'both',
}

/** What is said about one adjuster: each a whole sentence, for the verdict row, the ladder and a screen reader. */
export type VerdictSentences = {
  which: Which
  verdict: SizeVerdict
  /** "gain covers" */
  headline: string
  /** "12 bits over ±367 mV: reaches 25 % past what the budget asks, steps 5.1 times finer than the target needs." */
  plain: string
  reach: string
  step: string
  bits: string
  /** What to change; null when it covers. */
  remedy: string | null
}

/**
 * The answer of a sizing in plain words, one entry an adjuster, gain first.
 * @param design the one that was sized, for what could be changed in it
 * @example verdictSentences(design, size)[0]?.headline // 'gain covers'
 */
export function verdictSentences(
  design: { adjusters: PerAdjuster<Adjuster> },
  result: SizeResult,
): VerdictSentences[] {
  return (['gain', 'offset'] as const).flatMap((which) => {
    const size = result.adjusters[which]
    const adjuster = design.adjusters[which]
    return size && adjuster ? [sentencesOf(which, size, adjuster)] : []
  })
}

function sentencesOf(which: Which, size: AdjusterSize, adjuster: Adjuster): VerdictSentences {
  const { available, requiredStepV, outputPerV } = size
  const allowedV = requiredStepV * outputPerV
  return {
    which,
    verdict: size.verdict,
    headline: `${which} ${verdictWords[size.verdict]}`,
    plain: plainSentence(which, size),
    reach: `Reach ${volts(size.availableReachOutputV)} of ${volts(size.requiredReachOutputV)} needed.`,
    step: `Step ${volts(available.outputStepV)} of ${volts(allowedV)} allowed.`,
    bits: bitsSentence(size),
    remedy: remedyOf(which, size, adjuster),
  }
}

function plainSentence(which: Which, size: AdjusterSize): string {
  const { available, reachMargin, stepMargin } = size
  const head = `${bitsWord(available.bits)} over ${span(available.lowV, available.highV)}:`
  const step =
    stepMargin >= 1
      ? `steps ${times(stepMargin)} times finer than the target needs`
      : `steps ${times(1 / stepMargin)} times coarser than the target allows`
  if (reachMargin === null) return `${head} the budget asks nothing of the ${which} adjuster; ${step}.`
  const reach =
    reachMargin >= 0
      ? `reaches ${past(reachMargin)} what the budget asks`
      : `reaches ${times((reachMargin + 1) * 100)} % of what the budget asks`
  return `${head} ${reach}, ${step}.`
}

function bitsSentence({ available, requiredBits, verdict }: AdjusterSize): string {
  const has = bitsWord(available.bits)
  if (verdict !== 'covers') return `${has}; the demand is ${bitsWord(requiredBits)} tall.`
  if (requiredBits >= available.bits) return `${has} hold.`
  return `${has} hold; ${requiredBits} would do.`
}

/** Bits short and what to change, as the ladder says it. */
function remedyOf(which: Which, size: AdjusterSize, adjuster: Adjuster): string | null {
  const { verdict, available, requiredBits, recommended } = size
  if (verdict === 'covers') return null
  const reach = verdict === 'coarse' ? null : reachShort(size)
  const coarse = log2(1 / size.stepMargin)
  if (verdict === 'short') return `${reach} ${reachRemedy(which, size, adjuster)}`
  const takes = recommended?.bits ?? requiredBits
  if (verdict === 'both' && requiredBits > available.bits) {
    return `No span of ${bitsWord(available.bits)} holds the demand. Take ${takes}.`
  }
  if (verdict === 'both') {
    return `${reach} Too coarse: ${bitsAmount(coarse)}. ${bitsWord(available.bits)} hold the demand, but this span lies beside it: centre the span.`
  }
  // More bits on the same span reach the target; fewer volts would too, where the reach allows it.
  const more = available.bits + Math.ceil(coarse - 1e-9)
  return `Too coarse: ${bitsAmount(coarse)}. Take ${more + (more % 2)} bits.`
}

function reachShort({ reachSpareBits }: AdjusterSize): string {
  return reachSpareBits === null
    ? 'Short of reach: nothing is reached on the side that is needed.'
    : `Short of reach: ${bitsAmount(-reachSpareBits)}.`
}
