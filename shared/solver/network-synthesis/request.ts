import { OgeeError } from '../../errors.ts'
import { nodeMap, nodeV } from '../network.ts'
import type { Adjuster, Network, PerAdjuster, Which } from '../types.ts'
import type { Series } from './series.ts'

/** What is asked of a network. Volts, ohms, amperes, ratios. */
export type NetworkRequest = {
  /** Voltages that the node must reach. */
  wantedLowV: number
  wantedHighV: number
  series: Series
  /** Of each resistor: 0.001 for 0.1 %. */
  tolerance: number
  maxSourceOhm?: number | undefined
  maxCurrentA?: number | undefined
  /** Left out: the design's own kind; for a direct connection a divider. */
  kind?: 'divider' | 'shifted' | undefined
  /** Reference of a shifted network; left out: the design's. */
  shiftV?: number | undefined
  /** How many candidates to give, 10 when left out. */
  count?: number | undefined
}

export type NetworkCandidate = {
  network: Network
  nodeLowV: number
  nodeHighV: number
  /** The least that is reached on each side over the corners of the resistors' tolerance. */
  cornerLowV: number
  cornerHighV: number
  stepV: number
  cornerStepV: number
  /** log2 of what is reached over what is wanted: resolution spent on reach that nobody needs. */
  lostBits: number
  /** Without the node's input resistance. */
  sourceOhm: number
  dacCurrentA: number
}

export type NetworkResult = {
  format: 'ogee.network/1'
  solver: string
  adjuster: Which
  series: Series
  tolerance: number
  wantedLowV: number
  wantedHighV: number
  maxSourceOhm: number | null
  maxCurrentA: number | null
  candidates: NetworkCandidate[]
  /** Why no value set meets the request; the one candidate is then the nearest. Null when there are some. */
  obstacle: string | null
  /** The design's own network by the same measures; null where it is direct. */
  own: NetworkCandidate | null
}

/** The request in the form that the search reads: conductances later, ends of the auxiliary DAC rising. */
export type Wanted = {
  which: Which
  adjuster: Adjuster
  kind: 'divider' | 'shifted'
  shiftV: number
  /** Extreme voltages of the auxiliary DAC's codes and its step, V. */
  auxLow: number
  auxHigh: number
  auxStep: number
  /** Ends to reach, the span's tolerance of the auxiliary DAC taken out of its reach. */
  low: number
  high: number
  /** 1/ohm; 0 without an input resistance. */
  inputS: number
  returnA: number
  tolerance: number
  series: Series
  maxSourceOhm: number
  maxCurrentA: number
  count: number
}

/**
 * Checks a request against its adjuster.
 * @throws network-request, and as `nodeMap`
 */
export function wantedOf(
  design: { adjusters: PerAdjuster<Adjuster> },
  which: Which,
  request: NetworkRequest,
): Wanted {
  const adjuster = design.adjusters[which]
  if (adjuster === undefined) {
    throw refusal('/adjusters', `The design has no ${which} adjuster, so there is no network to find.`)
  }
  const { source, node, network } = adjuster
  checkNumbers(request, which)
  const kind = request.kind ?? (network.kind === 'direct' ? 'divider' : network.kind)
  const shiftV = request.shiftV ?? (network.kind === 'shifted' ? network.shiftV : undefined)
  if (kind === 'shifted' && (shiftV === undefined || !Number.isFinite(shiftV))) {
    const path = `/adjusters/${which}/network/shiftV`
    throw refusal(path, 'A shifted network needs the voltage of its reference. Give shiftV.')
  }
  // The direct connection of the same part: its ends and step are the auxiliary DAC's own.
  const aux = nodeMap({ effect: adjuster.effect, source, node, network: { kind: 'direct' } }, which)
  const ends = [nodeV(aux, 0), nodeV(aux, aux.count - 1)]
  const loose = source.spanTolerance ?? 0
  const beyond = (v: number, outward: boolean) =>
    node.nominalV + (v - node.nominalV) / (outward ? 1 - loose : 1 + loose)
  return {
    which,
    adjuster,
    kind,
    shiftV: shiftV ?? 0,
    auxLow: Math.min(...ends),
    auxHigh: Math.max(...ends),
    auxStep: Math.abs(aux.stepV),
    low: beyond(request.wantedLowV, request.wantedLowV < node.nominalV),
    high: beyond(request.wantedHighV, request.wantedHighV > node.nominalV),
    inputS: node.inputOhm === undefined ? 0 : 1 / node.inputOhm,
    returnA: node.inputOhm === undefined ? 0 : (node.returnV ?? 0) / node.inputOhm,
    tolerance: request.tolerance,
    series: request.series,
    maxSourceOhm: request.maxSourceOhm ?? Number.POSITIVE_INFINITY,
    maxCurrentA: request.maxCurrentA ?? Number.POSITIVE_INFINITY,
    count: request.count ?? 10,
  }
}

function checkNumbers(request: NetworkRequest, which: Which): void {
  const { wantedLowV, wantedHighV, tolerance, maxSourceOhm, maxCurrentA } = request
  if (!(wantedLowV < wantedHighV) || !Number.isFinite(wantedHighV - wantedLowV)) {
    throw refusal(
      `/adjusters/${which}`,
      `${wantedLowV} V to ${wantedHighV} V is no span that a network could be found for: the upper end must lie above the lower.`,
    )
  }
  if (!(tolerance >= 0 && tolerance < 0.5)) {
    throw refusal(
      '/tolerance',
      `A resistor tolerance of ${tolerance} is not at least 0 and under 0.5. Write 0.1 %.`,
    )
  }
  if (maxSourceOhm !== undefined && !(maxSourceOhm > 0)) {
    throw refusal(
      '/maxSource',
      `The limit of the source resistance is ${maxSourceOhm} ohm; it must be over 0 ohm.`,
    )
  }
  if (maxCurrentA !== undefined && !(maxCurrentA > 0)) {
    throw refusal('/maxCurrent', `The limit of the DAC current is ${maxCurrentA} A; it must be over 0 A.`)
  }
}

function refusal(path: string, message: string): OgeeError {
  return new OgeeError('network-request', message, { errors: [{ path, message }] })
}
