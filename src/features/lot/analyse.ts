import type { Design } from '../../../shared/contract/design.ts'
import type { LotUnit } from '../../../shared/contract/lots.ts'
import type { Trimmer } from '../../../shared/solver/adjuster.ts'
import {
  type Capability,
  capability,
  expectedOutside,
  type Limits,
} from '../../../shared/solver/lots/capability.ts'
import { type IndividualsChart, individualsChart } from '../../../shared/solver/lots/individuals.ts'
import { reachLimits, shareOfReach, worstReach } from '../../../shared/solver/lots/reach-limits.ts'
import { type Spread, spreadOf } from '../../../shared/solver/lots/spread.ts'
import { prepareTrim, type TrimChannel } from '../../../shared/solver/prepare-trim.ts'
import { sizeDesign } from '../../../shared/solver/sizing/size.ts'

export type Which = 'gain' | 'offset'

/** One channel of one unit as found. Errors as shown: gain in ppm, offset in µV. */
export type LotPoint = {
  unit: string
  channel: string
  record: string
  station: string
  at: number
  gain: number
  offset: number
  isOut: boolean
  left: number | null
  reachUsed: { gain: number | null; offset: number | null }
}

/** What the lot says about one of the two errors; everything in the unit shown. */
export type Side = {
  which: Which
  unit: 'ppm' | 'µV'
  spread: Spread | null
  /** Units out of reach stand outside mean and s, unless there is no other. */
  from: 'in-reach' | 'all'
  chart: IndividualsChart | null
  reach: Limits
  worst: Limits
  tolerance: number
  demand: Limits | null
  capability: Capability | null
  expectedOut: number | null
  reachUsed: number | null
}

export type Analysis = {
  points: LotPoint[]
  outOfReach: number
  gain: Side | null
  offset: Side | null
}

/** Errors are volts and ratios; people read ppm and µV. */
const shown = 1e6

/**
 * As-found errors of one range of a lot, in the order in which they were read: limits of reach and budget, spread, chart,
 * capability. Reference units are left out, and so are suspect measurements that nobody accepted.
 */
export function analyse(
  design: Design,
  units: readonly LotUnit[],
  rangeId: string,
  channel: string | null,
): Analysis {
  const trim = trimOf(design, rangeId)
  const points = pointsOf(units, rangeId, channel, trim)
  const inReach = points.filter(({ isOut }) => !isOut)
  const demand = demandOf(design, rangeId, trim)
  const side = (which: Which): Side | null => {
    const trimmer = trim?.trimmers[which]
    return trimmer ? sideOf(trimmer, points, inReach, demand[which]) : null
  }
  return {
    points,
    outOfReach: points.length - inReach.length,
    gain: side('gain'),
    offset: side('offset'),
  }
}

function trimOf(design: Design, rangeId: string): TrimChannel | null {
  if (design.adjusters.gain === undefined && design.adjusters.offset === undefined) return null
  return prepareTrim(design, rangeId)
}

function pointsOf(
  units: readonly LotUnit[],
  rangeId: string,
  channel: string | null,
  trim: TrimChannel | null,
): LotPoint[] {
  const points: LotPoint[] = []
  for (const { unit, reference, places } of units) {
    if (reference) continue
    for (const place of places) {
      const { found } = place
      if (place.range !== rangeId || (channel !== null && place.channel !== channel) || found === null)
        continue
      if (found.verdict === 'suspect' && place.standing === 'suspect') continue
      const line = { offset: found.offsetErrorV, gain: found.gainErrorPpm / 1e6 }
      points.push({
        unit,
        channel: place.channel,
        record: found.record,
        station: found.station ?? 'no station',
        at: Date.parse(found.at),
        gain: found.gainErrorPpm,
        offset: found.offsetErrorV * shown,
        isOut: found.verdict === 'out-of-reach',
        left: place.left === null ? null : Math.abs(place.left.worstLsb),
        reachUsed: trim ? shareOfReach(trim, place.codes, line) : { gain: null, offset: null },
      })
    }
  }
  return points.sort((a, b) => a.at - b.at)
}

function sideOf(
  trimmer: Trimmer,
  points: readonly LotPoint[],
  inReach: readonly LotPoint[],
  demand: Limits | null,
): Side {
  const { which, tolerance } = trimmer
  const from = inReach.length > 0 ? 'in-reach' : 'all'
  const counted = from === 'in-reach' ? inReach : points
  const values = counted.map((point) => point[which])
  const spread = spreadOf(values)
  const worst = scaled(worstReach(trimmer))
  const used = counted.flatMap((point) => point.reachUsed[which] ?? [])
  return {
    which,
    unit: which === 'gain' ? 'ppm' : 'µV',
    spread,
    from,
    chart: individualsChart(values),
    reach: scaled(reachLimits(trimmer, 1)),
    worst,
    tolerance,
    demand,
    capability: spread ? capability(spread.mean, spread.s, worst) : null,
    expectedOut: spread ? expectedOutside(spread.mean, spread.s, worst) : null,
    reachUsed: used.length > 0 ? used.reduce((most, share) => Math.max(most, share)) : null,
  }
}

const scaled = ({ low, high }: Limits): Limits => ({ low: low * shown, high: high * shown })

/** The errors that the released budget demands each adjuster to take away, its margin and tolerance included. */
function demandOf(design: Design, rangeId: string, trim: TrimChannel | null): Record<Which, Limits | null> {
  if (!trim || !design.budget) return { gain: null, offset: null }
  try {
    const { adjusters } = sizeDesign(design, { rangeId })
    const of = (which: Which): Limits | null => {
      const sized = adjusters[which]
      const trimmer = trim.trimmers[which]
      if (!sized || !trimmer) return null
      const effect = which === 'gain' ? trimmer.beta : trimmer.alpha
      const ends = [sized.requiredLowV, sized.requiredHighV].map(
        (volts) => -effect * (volts - trimmer.nominalV),
      )
      return scaled({ low: Math.min(...ends), high: Math.max(...ends) })
    }
    return { gain: of('gain'), offset: of('offset') }
  } catch {
    // A budget that cannot be sized demands nothing; the Design page says why.
    return { gain: null, offset: null }
  }
}
