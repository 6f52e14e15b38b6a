import { type ErrorCode, OgeeError } from '../errors.ts'
import { limits } from '../limits.ts'
import { powerOfTwo } from './distribution/elementary.ts'
import type { Adjuster, AuxSource, Which } from './types.ts'

/** From the auxiliary DAC's code to the adjust node: V_node(k) = v0 + k·stepV. */
export type NodeMap = {
  v0: number
  stepV: number
  /** Number of codes, 2^bits. */
  count: number
  /** Source resistance of the network without the node's input resistance, ohm. */
  sourceOhm: number
  /** Largest current from the auxiliary DAC over its codes, A; 0 for `direct`, where nothing is known of the load. */
  dacCurrentA: number
}

/**
 * The auxiliary DAC and its network as a straight line in the code.
 * @param adjuster source (a at code 0, b at code 2^n), network and node; volts, ohms
 * @param which for the place in messages
 * @throws resistance-not-positive, source-span-zero, bits-out-of-bounds, not-finite; `errors[].path` points into the design
 * Source: solver.md section 7; Millman's theorem, V = Σ(V_j/R_j)/Σ(1/R_j).
 * @example nodeMap(unipolar18.adjusters.offset, 'offset').stepV // 5 / 4096
 */
export function nodeMap(adjuster: Adjuster, which: Which): NodeMap {
  const { source, network, node } = adjuster
  checkSource(source, which)
  const count = powerOfTwo(source.bits)
  const stepV = (source.highV - source.lowV) / count
  if (node.inputOhm !== undefined) positive(node.inputOhm, which, 'node/inputOhm')
  if (network.kind === 'direct') {
    return { v0: source.lowV, stepV, count, sourceOhm: 0, dacCurrentA: 0 }
  }
  const top = 1 / positive(network.topOhm, which, 'network/topOhm')
  let sum = top
  let others = 0
  if (network.kind === 'shifted') {
    const shift = 1 / positive(network.shiftOhm, which, 'network/shiftOhm')
    sum += shift
    others += network.shiftV * shift
  }
  if (network.bottomOhm !== undefined) sum += 1 / positive(network.bottomOhm, which, 'network/bottomOhm')
  const sourceOhm = 1 / sum
  if (node.inputOhm !== undefined) {
    sum += 1 / node.inputOhm
    others += (node.returnV ?? 0) / node.inputOhm
  }
  const v0 = (source.lowV * top + others) / sum
  const nodeStep = (stepV * top) / sum
  const atLow = Math.abs(source.lowV - v0)
  const last = count - 1
  const atHigh = Math.abs(source.lowV + last * stepV - (v0 + last * nodeStep))
  // The current is a straight line in the code, so its largest size stands at an end.
  const dacCurrentA = Math.max(atLow, atHigh) * top
  return finite({ v0, stepV: nodeStep, count, sourceOhm, dacCurrentA }, which)
}

function checkSource(source: AuxSource, which: Which): void {
  const { bits } = source
  if (!Number.isInteger(bits) || bits < limits.sourceBitsMin || bits > limits.sourceBitsMax) {
    const range = `${limits.sourceBitsMin} to ${limits.sourceBitsMax}`
    refuse('bits-out-of-bounds', which, 'source/bits', `${bits} bits: an auxiliary DAC may have ${range}.`)
  }
  if (!Number.isFinite(source.highV - source.lowV)) {
    refuse('not-finite', which, 'source/highV', 'the span of the auxiliary DAC is not finite.')
  }
  if (source.lowV === source.highV) {
    refuse('source-span-zero', which, 'source/highV', 'both ends of the auxiliary DAC are the same voltage.')
  }
}

/** The resistance, when it is over zero and finite. */
export function positive(ohm: number, which: Which, field: string): number {
  if (!(ohm > 0) || !Number.isFinite(ohm)) {
    refuse(
      'resistance-not-positive',
      which,
      field,
      `${field.split('/').pop()} is ${ohm} ohm; it must be over 0 ohm.`,
    )
  }
  return ohm
}

function finite(map: NodeMap, which: Which): NodeMap {
  if (!Number.isFinite(map.v0) || !Number.isFinite(map.stepV) || map.stepV === 0) {
    refuse('not-finite', which, 'network', 'the network carries no finite voltage to the node.')
  }
  return map
}

/** Throws with the place in the design. */
export function refuse(code: ErrorCode, which: Which, field: string, sentence: string): never {
  const message = `${which === 'gain' ? 'Gain' : 'Offset'} adjuster: ${sentence}`
  throw new OgeeError(code, message, { errors: [{ path: `/adjusters/${which}/${field}`, message }] })
}

/**
 * The node voltage of an auxiliary code.
 * @example nodeV(gain, 0) // gain.v0
 */
export function nodeV(map: { v0: number; stepV: number }, code: number): number {
  return map.v0 + code * map.stepV
}
