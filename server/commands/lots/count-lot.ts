import {
  goodStandings,
  type LotCounts,
  type Standing,
  standing,
  undecidedStandings,
} from '../../../shared/contract/lot-standing.ts'
import { wilson } from '../../../shared/solver/yield/wilson.ts'
import { type Board, type BoardUnit, demandedBy, unitStanding } from './board.ts'

/** How a lot stands, unit by unit, reference units apart. */
export type LotStandings = {
  units: { unit: BoardUnit; standing: Standing }[]
  missing: string[]
  references: string[]
  counts: LotCounts
}

/**
 * Yield: of the units with records in the lot, reference units apart, the share whose every channel and range has accepted
 * codes that are not too coarse and, where verified after the last trim, a pass. The channels and ranges are those that units
 * of this lot have.
 */
export function countLot(board: Board, references: ReadonlyMap<number, string>): LotStandings {
  const isReference = new Set(references.keys())
  const demanded = demandedBy(board, isReference)
  const counting = [...board.units].filter(([id, { places }]) => places.size > 0 && !isReference.has(id))
  const units = counting.map(([, unit]) => ({ unit, standing: unitStanding(unit.places, demanded) }))
  const recorded = new Set<string>()
  const measured: string[] = []
  for (const [id, { serial, places }] of board.units) {
    if (places.size === 0) continue
    recorded.add(serial)
    if (isReference.has(id)) measured.push(serial)
  }
  const missing = board.expected.filter((serial) => !recorded.has(serial))
  return {
    units,
    missing,
    references: measured.sort((a, b) => (a < b ? -1 : 1)),
    counts: countsOf(units, missing.length, measured.length),
  }
}

function countsOf(units: LotStandings['units'], missing: number, references: number): LotCounts {
  const byStanding = Object.fromEntries(standing.options.map((one) => [one, 0])) as Record<Standing, number>
  for (const { standing } of units) byStanding[standing] += 1
  const sum = (of: readonly Standing[]) => of.reduce((total, one) => total + byStanding[one], 0)
  const good = sum(goodStandings)
  const all = units.length
  const interval = all === 0 ? null : wilson(good, all)
  return {
    units: all,
    good,
    undecided: sum(undecidedStandings),
    missing,
    references,
    byStanding,
    share: all === 0 ? null : good / all,
    low95: interval?.low ?? null,
    high95: interval?.high ?? null,
  }
}
