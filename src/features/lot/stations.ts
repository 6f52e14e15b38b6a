import type { StationMonth } from '../../../shared/contract/lots.ts'
import type { Spread } from '../../../shared/solver/lots/spread.ts'
import {
  type Difference,
  type Drift,
  driftOf,
  stationDifference,
} from '../../../shared/solver/lots/stations.ts'
import type { Which } from './analyse.ts'

/** A station's month: mean less the mean of all, in the unit shown; `bar` is U of the mean, k = 2. */
export type StationPoint = {
  month: string
  step: number
  value: number
  bar: number | null
  n: number
  spread: Spread
}
export type StationLine = { station: string; points: StationPoint[] }
export type Comparison = {
  by: 'reference' | 'units'
  lines: StationLine[]
  /** The newest month that two stations share: the second less the first. */
  newest: { month: string; first: string; second: string; difference: Difference } | null
  drift: (Drift & { since: string; station: string }) | null
}

const steps = (month: string): number => {
  const [year = 0, number = 0] = month.split('-').map(Number)
  return year * 12 + number
}

/**
 * Stations against each other by month. Reference units tell most, since the same unit is read at each station; without
 * them units as found are compared, and their spread from unit to unit counts.
 */
export function compareStations(items: readonly StationMonth[], range: string, which: Which): Comparison {
  const ofRange = items.filter((item) => item.range === range)
  const references = ofRange.filter(({ unit }) => unit !== null)
  const stations = new Set(references.map(({ station }) => station))
  const by = stations.size > 1 ? 'reference' : 'units'
  const lines = linesOf(by === 'reference' ? references : ofRange.filter(({ unit }) => unit === null), which)
  return { by, lines, ...differences(lines) }
}

type Group = { n: number; mean: number; s: number | null }

function groupOf(item: StationMonth, which: Which): Group {
  return which === 'gain'
    ? { n: item.n, mean: item.gainMeanPpm, s: item.gainS }
    : { n: item.n, mean: item.offsetMeanV * 1e6, s: item.offsetS === null ? null : item.offsetS * 1e6 }
}

/** Each unit and channel less its own mean over all stations and months, then pooled by station and month. */
function linesOf(items: readonly StationMonth[], which: Which): StationLine[] {
  const centres = new Map<string, { sum: number; n: number }>()
  const keyOf = ({ unit, channel }: StationMonth) => (unit === null ? '' : `${channel} ${unit}`)
  for (const item of items) {
    const { n, mean } = groupOf(item, which)
    const centre = centres.get(keyOf(item)) ?? { sum: 0, n: 0 }
    centres.set(keyOf(item), { sum: centre.sum + n * mean, n: centre.n + n })
  }
  const byStation = new Map<string, Map<string, Group[]>>()
  for (const item of items) {
    const centre = centres.get(keyOf(item))!
    const group = groupOf(item, which)
    const months = byStation.get(item.station) ?? new Map<string, Group[]>()
    byStation.set(item.station, months)
    months.set(item.month, [
      ...(months.get(item.month) ?? []),
      { ...group, mean: group.mean - centre.sum / centre.n },
    ])
  }
  return [...byStation]
    .sort(([a], [b]) => (a < b ? -1 : 1))
    .map(([station, months]) => ({
      station,
      points: [...months].map(([month, groups]) => pointOf(month, pooled(groups))),
    }))
}

/** Several groups as one: their values together. */
function pooled(groups: readonly Group[]): Spread {
  const n = groups.reduce((sum, group) => sum + group.n, 0)
  const mean = groups.reduce((sum, group) => sum + group.n * group.mean, 0) / n
  if (n < 2) return { n, mean, s: null }
  const squares = groups.reduce(
    (sum, group) =>
      sum +
      (group.n - 1) * (group.s ?? 0) * (group.s ?? 0) +
      group.n * (group.mean - mean) * (group.mean - mean),
    0,
  )
  return { n, mean, s: Math.sqrt(squares / (n - 1)) }
}

function pointOf(month: string, spread: Spread): StationPoint {
  const bar = spread.s === null ? null : (2 * spread.s) / Math.sqrt(spread.n)
  return { month, step: steps(month), value: spread.mean, bar, n: spread.n, spread }
}

function differences(lines: readonly StationLine[]): Pick<Comparison, 'newest' | 'drift'> {
  const [first, second] = lines
  if (!first || !second) return { newest: null, drift: null }
  const shared = second.points.flatMap((point) => {
    const other = first.points.find(({ month }) => month === point.month)
    const difference = other ? stationDifference(point.spread, other.spread) : null
    return difference ? [{ month: point.month, step: point.step, difference }] : []
  })
  const last = shared.at(-1)
  if (!last) return { newest: null, drift: null }
  const drift = driftOf(
    shared.map(({ step, difference }) => ({ at: step, value: difference.value, u: difference.standard })),
  )
  return {
    newest: { month: last.month, first: first.station, second: second.station, difference: last.difference },
    drift: drift ? { ...drift, since: shared[0]!.month, station: second.station } : null,
  }
}
