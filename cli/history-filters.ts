import type { InputOf } from '../shared/contract/endpoint.ts'
import { outcome, verdict } from '../shared/contract/primitives.ts'
import { kind as recordKind } from '../shared/contract/record.ts'
import { listTrims } from '../shared/contract/trims.ts'
import { limits } from '../shared/limits.ts'
import type { Client } from './client.ts'
import type { Given, OptionSpec } from './command.ts'
import { oneOf, text, wholeNumber } from './option-values.ts'

/** The filters of History, for every command that takes them. */

export type HistoryQuery = InputOf<typeof listTrims>['query']

const verdicts = [...verdict.options, ...outcome.options]
export const filterOptions: readonly OptionSpec[] = [
  { flags: '--unit <serial>', says: 'records of this unit' },
  { flags: '--serial <text>', says: 'of units whose serial, or a part of it, begins so' },
  { flags: '--lot <lots>', says: 'of these lots, separated by commas' },
  { flags: '--design <keys>', says: 'of these designs' },
  { flags: '--revision <number>', says: 'of this revision of the design' },
  { flags: '--station <names>', says: 'of these stations, by name or id' },
  { flags: '--by <ids>', says: 'recorded by these people or tokens' },
  { flags: '--kind <kind>', says: 'records of this kind', choices: recordKind.options },
  { flags: '--verdict <verdict>', says: 'records with this verdict', choices: verdicts },
  { flags: '--attempt <count>', says: 'measured at least so often on that day' },
  { flags: '--from <time>', says: 'since a day (UTC) or a time' },
  { flags: '--to <time>', says: 'until a day (UTC, whole) or a time' },
]

/** Passed on as they were typed: the contract says what each may be. */
const plainFilters = ['unit', 'serial', 'lot', 'design', 'station', 'by', 'from', 'to'] as const

export function readFilters(options: Given['options']): HistoryQuery {
  const query: HistoryQuery = {}
  for (const name of plainFilters) {
    const value = text(options[name])
    if (value !== undefined) query[name] = value
  }
  for (const name of ['revision', 'attempt'] as const) {
    const value = text(options[name])
    if (value !== undefined) query[name] = wholeNumber(`--${name}`, value, 1, 1_000_000)
  }
  const [kind, found] = [text(options.kind), text(options.verdict)]
  if (kind !== undefined) query.kind = oneOf('--kind', kind, recordKind.options)
  if (found !== undefined) query.verdict = oneOf('--verdict', found, verdicts)
  return query
}

/** Follows the pages until there are enough records. */
export async function* historyPages(
  client: Pick<Client, 'call'>,
  { query, limit }: { query: HistoryQuery; limit: number },
) {
  let left = limit
  let { after } = query
  while (left > 0) {
    const asked = {
      ...query,
      limit: Math.min(limits.pageMax, left),
      ...(after === undefined ? {} : { after }),
    }
    const page = await client.call(listTrims, { query: asked })
    yield page
    if (page.next === null) return
    left -= page.items.length
    after = page.next
  }
}
