import type { ReplyOf } from '../../../shared/contract/endpoint.ts'
import type { countRecords } from '../../../shared/contract/history.ts'

export type Counted = ReplyOf<typeof countRecords>

/** "2 188 match", "over 100 000 match"; nothing when counting was given up. */
export function matchWords({ count, more }: Counted): string {
  if (count === null) return ''
  if (count === 0) return 'none match'
  if (count === 1 && !more) return '1 matches'
  return `${more ? 'over ' : ''}${spaced(count)} match`
}

/** Groups of three, for sentences; tables use NumberText. */
export const spaced = (count: number) => String(count).replaceAll(/\B(?=(\d{3})+$)/g, '\u202f')
