import type { LotDetail } from '../../../shared/contract/lots.ts'
import { NumberText } from '../../ui/number-text.tsx'
import { numberText } from '../../ui/plot/plot-numbers.ts'
import { utcText } from '../../ui/time-text.tsx'
import { Verdict } from '../../ui/verdict.tsx'
import type { Comparison } from './stations.ts'
import { unitsText } from './words.ts'

/** The first sentence: what stops sign-off, or that nothing does, or who signed. */
export function SignOffSentence({ lot }: { lot: LotDetail }) {
  const { counts, signedOff, signOff } = lot
  if (signedOff && signOff) {
    return (
      <p className="text-text">
        {`Signed off by ${signedOff.by}, ${utcText(signedOff.at).slice(0, 16)}, with ${signOff.counts.good} of ${signOff.counts.units} units good`}
        {signOff.leftOut.length > 0 ? ` and ${signOff.leftOut.length} left out` : ''}. Later records stand
        outside the lot.
      </p>
    )
  }
  if (counts.units === 0) return null
  const { byStanding } = counts
  const parts = [
    byStanding['out-of-reach'] > 0 ? `${unitsText(byStanding['out-of-reach'])} out of reach` : '',
    byStanding.fail + byStanding['conditional-fail'] > 0
      ? `${unitsText(byStanding.fail + byStanding['conditional-fail'])} failing`
      : '',
    byStanding.suspect > 0 ? `${unitsText(byStanding.suspect)} suspect` : '',
    byStanding.incomplete > 0 ? `${unitsText(byStanding.incomplete)} incomplete` : '',
    counts.missing > 0 ? `${unitsText(counts.missing)} expected and not recorded` : '',
  ].filter((part) => part !== '')
  if (parts.length === 0) return <p className="text-text">Nothing stops sign-off.</p>
  const [first, ...others] = parts
  const verdict = byStanding['out-of-reach'] > 0 ? 'out-of-reach' : byStanding.suspect > 0 ? 'suspect' : null
  return (
    <p className="text-text">
      {verdict === null || !first ? (
        <strong className="font-semibold">{first}</strong>
      ) : (
        <Verdict verdict={verdict} word={first} />
      )}
      {others.length > 0 ? `, ${others.join(', ')}` : ''}
      {'. Sign-off needs a decision on each.'}
    </p>
  )
}

/** Whether there is anything to look into: a difference over its uncertainty, or a clear drift. */
export function differs({ newest, drift }: Comparison): boolean {
  if (newest === null) return false
  return Math.abs(newest.difference.value) > newest.difference.expanded || drift?.isClear === true
}

/** The second sentence: which station reads differently, and whether it moves. */
export function StationSentence({
  comparison,
  what,
  unit,
}: {
  comparison: Comparison
  what: string
  unit: string
}) {
  const { newest, drift, by } = comparison
  if (newest === null) return null
  const { value, expanded, k } = newest.difference
  const size = numberText(Math.abs(value), 1)
  const spread = by === 'units' ? '; unit-to-unit spread included' : ', by reference units'
  const moving =
    drift?.isClear && Math.abs(drift.perStep) > 0
      ? ` It has moved about ${numberText(Math.abs(drift.perStep), Math.abs(drift.perStep) < 1 ? 2 : 1)} ${unit} a month since ${drift.since}.`
      : ''
  if (!differs(comparison)) {
    return (
      <p className="text-text text-ink-2">
        {`Stations agree in ${what}: ${newest.second} less ${newest.first} is ${numberText(value, 1, true)} ${unit} in ${newest.month} (U ${numberText(expanded, 1)} ${unit}, k = ${numberText(k, 1)}${spread}).`}
      </p>
    )
  }
  return (
    <p className="text-text">
      <strong className="font-semibold">
        {`${newest.second} reads ${what} `}
        <NumberText>{size}</NumberText>
        {` ${unit} ${value < 0 ? 'lower' : 'higher'} than ${newest.first}`}
      </strong>
      {` in ${newest.month} (U ${numberText(expanded, 1)} ${unit}, k = ${numberText(k, 1)}${spread}).${moving} Check its meter before the next lot.`}
    </p>
  )
}
