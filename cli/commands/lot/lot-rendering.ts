import type { Standing } from '../../../shared/contract/lot-standing.ts'
import { standing } from '../../../shared/contract/lot-standing.ts'
import type { LotDetail } from '../../../shared/contract/lots.ts'
import type { Rendering } from '../../output.ts'
import { pairs, textTable } from '../../table.ts'

const words: Record<Standing, string> = {
  'out-of-reach': 'out of reach',
  fail: 'fail',
  'conditional-fail': 'conditional fail',
  suspect: 'suspect',
  incomplete: 'incomplete',
  'too-coarse': 'too coarse',
  'conditional-pass': 'conditional pass',
  overridden: 'suspect, overridden',
  'ok-later': 'ok, later pass',
  'ok-first': 'ok, first pass',
}

export function lotRendering(lot: LotDetail): Rendering {
  const { counts } = lot
  const heads = [
    'lot',
    'design',
    'revision',
    'state',
    'units',
    'good',
    'undecided',
    'missing',
    'references',
    'share',
    'records',
    'first_at',
    'last_at',
  ]
  const row = [
    lot.key,
    lot.design,
    lot.revision,
    lot.state,
    counts.units,
    counts.good,
    counts.undecided,
    counts.missing,
    counts.references,
    counts.share,
    lot.records,
    lot.firstAt,
    lot.lastAt,
  ]
  return {
    json: { format: 'ogee.lot/1', ...lot },
    table: () => `${pairs(headPairs(lot))}\n${standingsTable(lot)}`,
    csv: { heads, rows: [row] },
  }
}

function headPairs(lot: LotDetail): [string, string][] {
  const { counts } = lot
  const percent = (share: number | null) => (share === null ? 'none' : `${(100 * share).toFixed(1)} %`)
  const interval =
    counts.low95 === null ? '' : ` (95 % interval ${percent(counts.low95)} to ${percent(counts.high95)})`
  return [
    ['Lot', `${lot.key}, design ${lot.design}, revision ${lot.revision}`],
    ['State', lot.signedOff ? `signed off by ${lot.signedOff.by}, ${lot.signedOff.at}` : lot.state],
    ['Yield', `${percent(counts.share)}, ${counts.good} of ${counts.units} units good${interval}`],
    ...(lot.expected === null
      ? []
      : [['Expected', `${lot.expected}, ${counts.missing} not recorded`] as [string, string]]),
    ...(lot.references.length === 0 ? [] : [['References', lot.references.join(', ')] as [string, string]]),
  ]
}

/** From best to worst, those that occur. */
function standingsTable({ counts }: LotDetail): string {
  const rows = [...standing.options]
    .reverse()
    .filter((one) => counts.byStanding[one] > 0)
    .map((one) => [words[one], counts.byStanding[one]])
  return textTable([{ head: 'Standing' }, { head: 'Units', right: true }], rows)
}
