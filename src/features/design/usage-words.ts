import type { RevisionUse } from '../../../shared/contract/revisions.ts'

const counted = (count: number, one: string, many: string) => `${count} ${count === 1 ? one : many}`
const named = ({ count, first }: { count: number; first: readonly string[] }) =>
  count === 0 ? '' : `: ${first.join(', ')}${count > first.length ? ' and others' : ''}`

/** What still stands on a revision. */
export function usageSentence({ lots, openLots, units }: RevisionUse): string {
  if (lots === 0 && units.count === 0) return 'Nothing uses this revision.'
  const ofLots = `${counted(lots, 'lot', 'lots')}, ${openLots.count} open${named(openLots)}`
  const ofUnits = `${counted(units.count, 'unit carries', 'units carry')} its codes${named(units)}`
  return `Still used by ${ofLots}; ${ofUnits}.`
}
