import type { Design } from '../../../shared/contract/design.ts'
import type { LotUnit } from '../../../shared/contract/lots.ts'

/** The range that the address names, else the one that most of the lot is of. */
export function shownRange(
  { ranges }: Design,
  units: readonly LotUnit[],
  asked: string | null,
): Design['ranges'][number] {
  const counts = new Map<string, number>()
  for (const { places } of units) {
    for (const { range } of places) counts.set(range, (counts.get(range) ?? 0) + 1)
  }
  const found = ranges.find(({ id }) => id === asked)
  const [first] = [...ranges].sort((a, b) => (counts.get(b.id) ?? 0) - (counts.get(a.id) ?? 0))
  if (!first) throw new Error('A design has at least one range.')
  return found ?? first
}
