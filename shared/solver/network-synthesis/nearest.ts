import { short } from '../sizing/remarks.ts'
import type { Network } from '../types.ts'
import { evaluateNetwork, uncovered } from './evaluate.ts'
import type { NetworkCandidate, Wanted } from './request.ts'
import { networkOf, searchNetworks, type Values } from './search.ts'

export type Nearest = { candidate: NetworkCandidate; obstacle: string }

/**
 * The value set that comes nearest where none meets the request, and what stands in the way: the limits of source
 * resistance and current first, then the reach itself.
 */
export function nearestNetwork(wanted: Wanted, values: Values): Nearest {
  const [covering] = searchNetworks({ ...wanted, count: 1 }, values, 'least-over')
  if (covering !== undefined) return overLimits(wanted, evaluateNetwork(wanted, covering.network))
  const network = widestReach(wanted, values)
  const candidate = evaluateNetwork(wanted, network)
  const exact =
    wanted.tolerance > 0 && searchNetworks({ ...wanted, tolerance: 0, count: 1 }, values, 'any').length > 0
  return { candidate, obstacle: reachObstacle(wanted, candidate, exact) }
}

/** Covering sets exist, but each breaks a limit: the one that breaks it least. */
function overLimits(wanted: Wanted, candidate: NetworkCandidate): Nearest {
  const limits: string[] = []
  if (wanted.maxSourceOhm < Number.POSITIVE_INFINITY) {
    limits.push(`source resistance at most ${short(wanted.maxSourceOhm)} ohm`)
  }
  if (wanted.maxCurrentA < Number.POSITIVE_INFINITY) {
    limits.push(`DAC current at most ${short(wanted.maxCurrentA * 1e6)} uA`)
  }
  const obstacle =
    `No ${wanted.series} values cover the span with ${limits.join(' and ')}. The nearest has ` +
    `${short(candidate.sourceOhm)} ohm and ${short(candidate.dacCurrentA * 1e6)} uA. Allow more of one of them.`
  return { candidate, obstacle }
}

/** Least uncovered: first on thinned lists, then around the best of them on the whole lists. */
function widestReach(wanted: Wanted, { top, shift, bottom }: Values): Network {
  const bottoms: (number | null)[] = wanted.kind === 'shifted' ? [...bottom, null] : bottom
  let centre = [top.length >> 1, shift.length >> 1, bottoms.length >> 1] as const
  let best: Network | null = null
  let least = Number.POSITIVE_INFINITY
  for (let stride = Math.max(1, top.length >> 4), window = 1e9; ; stride = stride >> 1, window = stride * 2) {
    const around = (values: readonly unknown[], at: number): number[] => {
      const from = Math.max(0, at - window)
      const to = Math.min(values.length - 1, at + window)
      const list: number[] = []
      for (let i = from; i < to; i += Math.max(1, stride)) list.push(i)
      return [...list, to]
    }
    const start = centre
    for (const i of around(top, start[0])) {
      for (const j of around(shift, start[1])) {
        for (const k of around(bottoms, start[2])) {
          const network = networkOf(wanted, top[i]!, shift[j]!, bottoms[k]!)
          const left = uncovered(wanted, evaluateNetwork(wanted, network))
          if (left < least) {
            least = left
            best = network
            centre = [i, j, k]
          }
        }
      }
    }
    if (stride <= 1) return best!
  }
}

/** `exact`: with resistors of no tolerance there would be values. */
function reachObstacle(wanted: Wanted, nearest: NetworkCandidate, exact: boolean): string {
  const { auxLow, auxHigh, low, high, kind, series, tolerance } = wanted
  const left = `The nearest leaves ${short(uncovered(wanted, nearest))} V uncovered.`
  const asked = `${short(low)} V to ${short(high)} V`
  const has = `${short(auxLow)} V to ${short(auxHigh)} V`
  if (auxHigh - auxLow < high - low) {
    return `The auxiliary DAC gives ${has}, and ${asked} is wanted at the node: resistors do not widen a span. Take a wider one. ${left}`
  }
  const within = low < 0 ? auxLow <= low : auxHigh >= high
  if (kind === 'divider' && ((low < 0 && auxLow >= 0) || (high > 0 && auxHigh <= 0) || !within)) {
    return `A divider to ground cannot bring ${has} to ${asked}: it does not move the middle. Take a shifted network. ${left}`
  }
  if (exact) {
    return `At a tolerance of ${short(tolerance * 100)} % no ${series} values cover ${asked} at every corner. Take a closer tolerance or a wider span. ${left}`
  }
  const cause =
    kind === 'shifted'
      ? `shifting ${has} by ${short(wanted.shiftV)} V takes too much of the span`
      : `a divider spends too much of ${has}`
  return `No ${series} values cover ${asked}: ${cause}. Take a wider span${kind === 'shifted' ? ' or a larger shift voltage' : ''}. ${left}`
}
