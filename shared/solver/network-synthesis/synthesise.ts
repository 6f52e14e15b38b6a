import { short } from '../sizing/remarks.ts'
import type { Adjuster, PerAdjuster, Which } from '../types.ts'
import { SOLVER_VERSION } from '../version.ts'
import { evaluateNetwork } from './evaluate.ts'
import { nearestNetwork } from './nearest.ts'
import { type NetworkRequest, type NetworkResult, type Wanted, wantedOf } from './request.ts'
import { searchNetworks, valuesOf } from './search.ts'

/**
 * Resistor values between the auxiliary DAC and the adjust node, out of a preferred series.
 * @param design its adjuster gives the auxiliary DAC, the node and the kind of network
 * @param request node voltages to reach (`requiredLowV` and `requiredHighV` of `ogee.size/1`), series, tolerance, limits
 * @returns `ogee.network/1`: value sets whose reach covers at every tolerance corner, by smallest corner-worst step, then
 *   lower source resistance, then larger top; where there is none the nearest and `obstacle`, a sentence. Top and
 *   shift from 1 kohm to 1 Mohm, bottom from 10 ohm to 10 Mohm
 * @throws network-request, source-span-zero, bits-out-of-bounds, resistance-not-positive
 * Source: solver.md section 7; IEC 60063:2015; Millman's theorem.
 * @example synthesiseNetwork(unipolar18, 'gain', request).candidates[0]?.network.topOhm // 5230
 */
export function synthesiseNetwork(
  design: { adjusters: PerAdjuster<Adjuster> },
  which: Which,
  request: NetworkRequest,
): NetworkResult {
  const wanted = wantedOf(design, which, request)
  const values = valuesOf(wanted)
  const found = searchNetworks(wanted, values, 'within')
  const nearest = found.length > 0 ? null : nearestNetwork(wanted, values)
  const { network } = wanted.adjuster
  return {
    format: 'ogee.network/1',
    solver: SOLVER_VERSION,
    adjuster: which,
    series: request.series,
    tolerance: request.tolerance,
    wantedLowV: request.wantedLowV,
    wantedHighV: request.wantedHighV,
    maxSourceOhm: request.maxSourceOhm ?? null,
    maxCurrentA: request.maxCurrentA ?? null,
    candidates:
      nearest === null ? found.map((set) => evaluateNetwork(wanted, set.network)) : [nearest.candidate],
    obstacle: nearest?.obstacle ?? nodeObstacle(wanted, request),
    own: network.kind === 'direct' ? null : evaluateNetwork(wanted, network),
  }
}

/** No network helps where the node itself may not go as far as is needed. */
function nodeObstacle({ adjuster }: Wanted, request: NetworkRequest): string | null {
  const { minV, maxV } = adjuster.node
  if (maxV !== undefined && maxV < request.wantedHighV) {
    return `The node may go to ${short(maxV)} V, but ${short(request.wantedHighV)} V is needed. No network helps: the limit lies inside the needed reach.`
  }
  if (minV !== undefined && minV > request.wantedLowV) {
    return `The node may go down to ${short(minV)} V, but ${short(request.wantedLowV)} V is needed. No network helps: the limit lies inside the needed reach.`
  }
  return null
}
