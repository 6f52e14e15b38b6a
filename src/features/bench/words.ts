import type { Revision } from '../../../shared/contract/designs.ts'
import type { Trimmer } from '../../../shared/solver/adjuster.ts'
import type { ConverterRange } from '../../../shared/solver/converter.ts'
import { nearestTrimCode } from '../../../shared/solver/joint-codes.ts'
import type {
  PerAdjuster,
  TrimResult,
  UsedEffect,
  VerifyResult,
  Which,
} from '../../../shared/solver/types.ts'
import { engineering, fixed, minus } from '../../ui/number-format.ts'

const both = ['gain', 'offset'] as const
const ordinals = ['First', 'Second', 'Third', 'Fourth', 'Fifth', 'Sixth', 'Seventh', 'Eighth', 'Ninth']

export const passName = (pass: number): string => `${ordinals[pass - 1] ?? `${pass}th`} pass`

export const codesText = (codes: PerAdjuster<number>): string =>
  both
    .filter((which) => codes[which] !== undefined)
    .map((which) => `${which} ${codes[which]}`)
    .join(', ')

/** "neutral (gain 2048, offset 2048)": the codes that stand nearest to nominal. */
export function neutralText(trimmers: { gain: Trimmer | null; offset: Trimmer | null }): string {
  const codes: PerAdjuster<number> = {}
  for (const which of both) {
    const trimmer = trimmers[which]
    const code = trimmer ? nearestTrimCode(trimmer, trimmer.nominalV) : null
    if (code !== null) codes[which] = code
  }
  const text = codesText(codes)
  return text === '' ? 'neutral' : `neutral (${text})`
}

/** Why nothing can be recorded under this revision; null when it is released. */
export function notReleased(revision: Revision, released: readonly number[]): string | null {
  const { number, state } = revision
  if (state === 'released') return null
  const others = released.length > 0 ? `: ${released.join(', ')}.` : '; there is none yet.'
  if (state === 'withdrawn') {
    return `Revision ${number} was withdrawn. Trims are recorded under released revisions only${others}`
  }
  const words = { draft: 'a draft', 'in-review': 'in review' } as const
  return `Revision ${number} is ${words[state]}. Trims are recorded under released revisions only${others}`
}

/** What the codes promise, or why they fall short of the target. */
export function predictionSentence(
  trim: TrimResult,
  trimmers: { gain: Trimmer | null; offset: Trimmer | null },
  range: ConverterRange,
  targetV: number,
): string | null {
  const { predicted } = trim
  if (!predicted) return null
  const worst = fixed(predicted.worstLsb, 2)
  const target = `target ${fixed(targetV / range.lsbV, 2).replace(/\.?0+$/, '')} LSB`
  if (!trim.reasons.includes('too-coarse')) {
    const U = predicted.expandedUncertaintyV
    const known = U === null ? '' : `, U ${fixed(U / range.lsbV, 2)} LSB`
    return `Predicted worst ${worst} LSB${known}, ${target} met.`
  }
  const alone = both.find((which) => trim.reasons.includes(`no-${which}-adjuster`))
  if (alone)
    return `Predicted worst ${worst} LSB, ${target}. The design has no ${alone} adjuster to take the rest.`
  return `Predicted worst ${worst} LSB, ${target}. The ${coarser(trimmers)} step is too coarse; see the design.`
}

function coarser({ gain, offset }: { gain: Trimmer | null; offset: Trimmer | null }): Which {
  const step = (trimmer: Trimmer | null) =>
    trimmer === null
      ? 0
      : Math.abs(trimmer.stepV) * Math.max(Math.abs(trimmer.endLow), Math.abs(trimmer.endFull))
  return step(gain) > step(offset) ? 'gain' : 'offset'
}

const keptBecause: Readonly<Record<string, string>> = {
  'no-uncertainty': 'the fits carry no uncertainty',
  'not-moved': 'it was not moved',
  'too-uncertain': 'the move is small against its uncertainty',
  'effect-off': 'it moved outside its tolerance',
}

/** Where the effects of this pass come from, one sentence an adjuster. */
export function effectSentences(effects: PerAdjuster<UsedEffect>, fromPass: number): string[] {
  return both.flatMap((which) => {
    const effect = effects[which]
    if (!effect) return []
    if (effect.source === 'design') {
      const why = keptBecause[effect.why ?? '']
      return why ? [`The design's effect of the ${which} adjuster is kept: ${why}.`] : []
    }
    const value =
      which === 'gain' && effect.slopePerV !== 0
        ? `slope ${scientific(effect.slopePerV)} /V`
        : `${which} ${scientific(effect.offsetPerV)} V/V`
    const off = fixed((effect.factor - 1) * 100, 1, 'always')
    return [
      `Effect taken again from pass ${fromPass}: ${value}, ${off} % from the design's value, known to ±${fixed(effect.tolerance * 100, 1)} %.`,
    ]
  })
}

const scientific = (value: number): string =>
  value.toExponential(3).replace(/e\+?/, 'e').replaceAll('-', minus)

/** What the decision rests on: the rule, the chance of conforming at the worst point, and whether U is small enough. */
export function decisionSentences(verify: VerifyResult): string[] {
  const { rule, points, notes, tur } = verify
  const known = points.flatMap(({ conformanceProbability: p }) => p ?? [])
  const by = rule === 'guarded' ? 'Tolerance less U decides.' : 'Tolerance alone decides.'
  const sentences = known.length === 0 ? [by] : [`${by} Probability of conforming ${chance(known)}.`]
  if (notes.includes('tur-under-4') && tur !== null) {
    const remedy = 'take more readings or a better instrument'
    sentences.push(`Test uncertainty ratio ${fixed(tur, 1)}, under 4: ${remedy}.`)
  }
  if (notes.includes('guard-band-too-wide')) {
    sentences.push('U is over the tolerance: such a point can never pass.')
  }
  return sentences
}

/** Of the least certain point, never rounded up to certainty. */
function chance(probabilities: readonly number[]): string {
  const least = Math.floor(Math.min(...probabilities) * 1000) / 10
  return least >= 99.9 ? 'over 99.9 %' : `at least ${fixed(least, 1)} %`
}

const counts = ['no', 'one', 'two', 'three', 'four', 'five', 'six', 'seven', 'eight', 'nine', 'ten']

/** "at all five codes. Worst 0.23 LSB at 2.5 V, target 0.5 LSB met." */
export function outcomeSentence(verify: VerifyResult, range: ConverterRange, targetV: number): string {
  const { points, outcome, worst } = verify
  const same = points.filter((point) => point.outcome === outcome).length
  const n = (count: number) => counts[count] ?? String(count)
  const where =
    same === points.length ? `at all ${n(same)} codes` : `at ${n(same)} of ${n(points.length)} codes`
  const at = points.find((point) => point.code === worst.code)?.idealV ?? 0
  const isMet = Math.abs(worst.errorV) <= targetV
  const target = `target ${fixed(targetV / range.lsbV, 2).replace(/\.?0+$/, '')} LSB ${isMet ? 'met' : 'not met'}`
  return `${where}. Worst ${fixed(Math.abs(worst.errorLsb), 2)} LSB at ${engineering(at, 'V')}, ${target}.`
}
