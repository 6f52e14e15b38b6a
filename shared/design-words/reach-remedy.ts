import { seriesValues } from '../solver/network-synthesis/series.ts'
import type { AdjusterSize } from '../solver/sizing/types.ts'
import type { Adjuster, Which } from '../solver/types.ts'
import { ohms, span, volts } from './words.ts'

/** What would bring the missing reach: the node's limit, the lower resistor, or the span. */
export function reachRemedy(which: Which, size: AdjusterSize, adjuster: Adjuster): string {
  const { network, node } = adjuster
  if (size.limitedBy === 'node') {
    const limit = size.tighterSide === 'low' ? node.minV : node.maxV
    return `The limit of the ${which} node, ${volts(limit ?? 0)}, lies inside the needed reach.`
  }
  const bottom = network.kind === 'divider' ? neededBottom(size, adjuster) : null
  if (bottom !== null) return `Raise R bottom to ${ohms(bottom)} or more.`
  const needed = span(size.requiredLowV, size.requiredHighV)
  return network.kind === 'direct'
    ? `Take an auxiliary DAC that spans ${needed}.`
    : `Take other values for the network: the node needs ${needed}.`
}

/**
 * The least lower resistor of a divider that reaches the tighter side, rounded up to E96; null when none does
 * (the auxiliary DAC itself falls short) or where the node is not nominally at 0 V, so that more than one resistor counts.
 * From V = V_aux·g_t/(g_t + g_b + g_in), the rest at 0 V.
 */
function neededBottom(size: AdjusterSize, { network, node, source }: Adjuster): number | null {
  if (network.kind !== 'divider' || node.nominalV !== 0 || (node.returnV ?? 0) !== 0) return null
  const needed = size.tighterSide === 'low' ? size.requiredLowV : size.requiredHighV
  let count = 1
  for (let bit = 0; bit < source.bits; bit++) count *= 2
  const last = source.lowV + (source.highV - source.lowV) * ((count - 1) / count)
  const toward = needed < 0 ? Math.min(source.lowV, last) : Math.max(source.lowV, last)
  const reaches = toward * (1 - (source.spanTolerance ?? 0))
  const top = 1 / network.topOhm
  const others = (reaches * top) / needed - top - (node.inputOhm === undefined ? 0 : 1 / node.inputOhm)
  if (!(others > 0)) return null
  // To be bought as it is named: the next value of E96.
  return seriesValues('E96', 1 / others, 10 / others)[0] ?? null
}
