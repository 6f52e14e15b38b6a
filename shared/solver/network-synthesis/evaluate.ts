import { nodeMap, nodeV } from '../network.ts'
import { log2 } from '../sizing/bits.ts'
import type { Network } from '../types.ts'
import type { NetworkCandidate, Wanted } from './request.ts'

/**
 * A network by the measures of a candidate: nominal and corner spans, steps, lost resolution, source resistance, current.
 * The node's voltage is monotone in each resistance, so the extremes lie at the corners of the tolerance.
 * Source: solver.md section 7.
 * @example evaluateNetwork(wanted, { kind: 'divider', topOhm: 8660, bottomOhm: 1500 }).sourceOhm // 1278.54330708661...
 */
export function evaluateNetwork(wanted: Wanted, network: Network): NetworkCandidate {
  const nominal = mapOf(wanted, network)
  const ends = endsOf(nominal)
  let cornerLowV = ends.low
  let cornerHighV = ends.high
  let cornerStepV = Math.abs(nominal.stepV)
  for (const corner of cornersOf(network, wanted.tolerance)) {
    const map = mapOf(wanted, corner)
    const { low, high } = endsOf(map)
    cornerLowV = Math.max(cornerLowV, low)
    cornerHighV = Math.min(cornerHighV, high)
    cornerStepV = Math.max(cornerStepV, Math.abs(map.stepV))
  }
  return {
    network,
    nodeLowV: ends.low,
    nodeHighV: ends.high,
    cornerLowV,
    cornerHighV,
    stepV: Math.abs(nominal.stepV),
    cornerStepV,
    lostBits: log2((ends.high - ends.low) / (wanted.high - wanted.low)),
    sourceOhm: nominal.sourceOhm,
    dacCurrentA: nominal.dacCurrentA,
  }
}

type Map = ReturnType<typeof nodeMap>

function mapOf({ adjuster, which }: Wanted, network: Network): Map {
  const { effect, node, source } = adjuster
  return nodeMap({ effect, node, source, network }, which)
}

function endsOf(map: Map): { low: number; high: number } {
  const a = nodeV(map, 0)
  const b = nodeV(map, map.count - 1)
  return a < b ? { low: a, high: b } : { low: b, high: a }
}

/** Every resistor at either end of its tolerance. */
export function cornersOf(network: Network, tolerance: number): Network[] {
  if (network.kind === 'direct' || tolerance === 0) return []
  const factors = [1 - tolerance, 1 + tolerance]
  const corners: Network[] = []
  for (const t of factors) {
    for (const b of factors) {
      if (network.kind === 'divider') {
        corners.push({ kind: 'divider', topOhm: network.topOhm * t, bottomOhm: network.bottomOhm * b })
        continue
      }
      const { kind, shiftV, shiftOhm } = network
      const bottomOhm = network.bottomOhm === undefined ? undefined : network.bottomOhm * b
      for (const s of factors) {
        corners.push({ kind, topOhm: network.topOhm * t, shiftOhm: shiftOhm * s, shiftV, bottomOhm })
      }
    }
  }
  return corners
}

/** How far the corners stay from what is wanted, V; 0 when they cover (slack 1e-9). */
export function uncovered(wanted: Wanted, candidate: NetworkCandidate): number {
  const short = Math.max(candidate.cornerLowV - wanted.low, wanted.high - candidate.cornerHighV)
  return short > 1e-9 * (wanted.high - wanted.low) ? short : 0
}
