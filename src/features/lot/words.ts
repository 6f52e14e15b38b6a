import type { Standing } from '../../../shared/contract/lot-standing.ts'
import type { Lot, LotUnit } from '../../../shared/contract/lots.ts'
import { fixed } from '../../ui/number-format.ts'
import type { VerdictName } from '../../ui/verdict.tsx'

/** A standing as a verdict: its shape and its words. Incomplete is no verdict. */
export const standingLook: Record<Standing, { verdict: VerdictName | null; word: string }> = {
  'out-of-reach': { verdict: 'out-of-reach', word: 'out of reach' },
  fail: { verdict: 'fail', word: 'fail' },
  'conditional-fail': { verdict: 'conditional-fail', word: 'conditional fail' },
  suspect: { verdict: 'suspect', word: 'suspect' },
  incomplete: { verdict: null, word: 'incomplete' },
  'too-coarse': { verdict: 'too-coarse', word: 'too coarse' },
  'conditional-pass': { verdict: 'conditional-pass', word: 'conditional pass' },
  overridden: { verdict: 'ok', word: 'ok, overridden' },
  'ok-later': { verdict: 'ok', word: 'ok, later pass' },
  'ok-first': { verdict: 'ok', word: 'ok, first pass' },
}

export const stateWords: Record<Lot['state'], string> = {
  open: 'open',
  closed: 'closed',
  'signed-off': 'signed off',
}

export const percent = (share: number | null): string =>
  share === null ? 'none' : `${fixed(share * 100, 1)} %`

/** "under 0.01 ppm" where the digits end: a share that small is a claim. */
export function shareText(share: number | null): string {
  if (share === null) return 'none'
  if (share >= 0.001) return `${fixed(share * 100, share < 0.1 ? 2 : 1)} %`
  if (share * 1e6 < 0.01) return 'under 0.01 ppm'
  return `${fixed(share * 1e6, share * 1e6 < 10 ? 2 : 0)} ppm`
}

/** How much of the reach is used: never so small that ppm would help. */
export const usedText = (share: number | null): string =>
  share === null ? 'none' : `${fixed(share * 100, share < 0.01 ? 2 : 1)} %`

export const ratioText = (ratio: number | null): string =>
  ratio === null ? 'none' : Math.abs(ratio) > 100 ? 'over 100' : fixed(ratio, 2)

type Attention = NonNullable<LotUnit['places'][number]['attention']>

/** Why a channel of a unit is worth a look, in one sentence. */
export function whySentence({ verdict, flags, reachUsed, worstLsb }: Attention): string {
  if (verdict === 'out-of-reach') return reachSentence(reachUsed)
  if (verdict === 'suspect') return flagSentence(flags)
  const worst = worstLsb === null ? '' : `${fixed(Math.abs(worstLsb), 2)} LSB`
  if (verdict === 'too-coarse') return `Predicted worst ${worst}: the target is finer than the step.`
  const sentences: Partial<Record<Attention['verdict'], string>> = {
    'conditional-pass': `As left ${worst}, inside the guard band. One pass more would do.`,
    'conditional-fail': `As left ${worst}, over the tolerance by less than the uncertainty.`,
    fail: `As left ${worst}, over the tolerance.`,
  }
  return sentences[verdict] ?? ''
}

function reachSentence(reachUsed: Attention['reachUsed']): string {
  const short = (['gain', 'offset'] as const).flatMap((which) => {
    const share = reachUsed[which]
    return share !== null && share !== undefined && share > 1
      ? [`${which} wants ${fixed(share, 2)} times the reach`]
      : []
  })
  const text = short.join(', ')
  return text === '' ? 'No code is in reach.' : `${text[0]!.toUpperCase()}${text.slice(1)}. Wrong resistor?`
}

const flagWords: Record<string, string> = {
  unsettled: 'unsettled',
  outlier: 'outlier',
  inconsistent: 'scatter over the uncertainties',
}

function flagSentence(flags: Attention['flags']): string {
  const suspect = flags.filter(({ flag }) => flag in flagWords)
  const code = suspect.find((flag) => flag.code !== null)?.code
  const names = [...new Set(suspect.map(({ flag }) => flagWords[flag]!))].join(' and ')
  if (names === '') return 'The fit is in doubt. Read again.'
  const at = code === null || code === undefined ? '' : ` at code ${code}`
  return `${names[0]!.toUpperCase()}${names.slice(1)}${at}. Read again, or decide.`
}

/** Lots and units in a sentence: "1 unit", "2 units". */
export const unitsText = (n: number): string => (n === 1 ? '1 unit' : `${n} units`)
