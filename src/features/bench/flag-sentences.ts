import type { FitResult, Flag } from '../../../shared/solver/types.ts'
import { fixed } from '../../ui/number-format.ts'

export type FlagSentence = { word: Flag['flag']; text: string; isSuspect: boolean }

const suspect = new Set<Flag['flag']>(['unsettled', 'outlier', 'inconsistent'])
const numerals = ['no', 'one', 'two', 'three', 'four', 'five', 'six', 'seven', 'eight', 'nine', 'ten']
const count = (n: number): string => numerals[n] ?? String(n)

/** Each flag in words: what was seen, against what is allowed. `readingsAt` counts the readings of a code. */
export function flagSentences(fit: FitResult, readingsAt: (code: number) => number): FlagSentence[] {
  return fit.flags.map((flag, index) => {
    const before = fit.flags[index - 1]
    const isSameCode = before !== undefined && before.code === flag.code && flag.code !== null
    const at = isSameCode ? 'at the same code' : `at code ${flag.code}`
    return { word: flag.flag, text: sentence(flag, at, fit, readingsAt), isSuspect: suspect.has(flag.flag) }
  })
}

function sentence(flag: Flag, at: string, fit: FitResult, readingsAt: (code: number) => number): string {
  const value = flag.value ?? 0
  const limit = flag.limit ?? 0
  switch (flag.flag) {
    case 'unsettled': {
      const n = count(readingsAt(flag.code ?? -1))
      const way = value < 0 ? 'fall' : 'rise'
      return `${at}: ${n} readings ${way} by ${fixed(Math.abs(value), 1)} LSB in order; ${limit} LSB is allowed.`
    }
    case 'outlier': {
      const residual = fit.residuals.find((r) => r.code === flag.code)?.residualLsb ?? value
      return `${at}: residual ${fixed(residual, 2, 'always')} LSB, ${fixed(value, 2, 'always')} LSB from the line of the others.`
    }
    case 'bow':
      return `the middle stands ${fixed(Math.abs(value), 2)} LSB ${value > 0 ? 'above' : 'below'} the ends; a straight line does not take it away.`
    case 'narrow':
      return `the codes cover ${fixed(value * 100, 0)} % of the range; from under ${fixed(limit * 100, 0)} % the line is extrapolated.`
    case 'inconsistent':
      return `residuals are larger than the uncertainties allow: chi-squared ${fixed(value, 1)} against ${fixed(limit, 1)}.`
    case 'effect-off':
      return `the ${flag.unit ?? ''} adjuster moved the output ${fixed(value, 3)} times as far as designed; ${fixed(limit, 2)} is the limit. The design's effect is used.`
  }
}

/** What to do about a suspect measurement, by its first reason. */
export function suspectAdvice(flags: readonly Flag[]): string {
  const first = flags.find((flag) => suspect.has(flag.flag))?.flag
  if (first === 'unsettled') {
    return 'One point was not settled when it was read. Wait and read it again; a warming or auto-zeroing amplifier shows exactly this.'
  }
  if (first === 'outlier') {
    return 'One point stands off the line of the others. Read it again; a wrong code, a loose wire or a typing slip shows exactly this.'
  }
  return 'The points scatter more than their uncertainties say. Check the uncertainties, then read again.'
}

/** The code to read again first, null when no single point is in doubt. */
export const doubtfulCode = (flags: readonly Flag[]): number | null =>
  flags.find((flag) => suspect.has(flag.flag) && flag.code !== null)?.code ?? null

/** Notes that people must act on, as sentences; others say nothing that the page does not show. */
export function noteSentences(notes: readonly string[]): string[] {
  const known: Readonly<Record<string, string>> = {
    'mixed-uncertainty': 'Some points carry an uncertainty and some do not: all are weighted alike.',
    'planned-noise': 'The uncertainty comes from the noise stated in the design.',
    'temperature-spread': 'The points were taken over 1 K apart.',
    'verify-after-loading':
      'The effects are not known well enough to promise the target: measure again after loading.',
  }
  return notes.flatMap((note) => known[note] ?? [])
}
