import type { NetworkCandidate } from '../../../shared/solver/network-synthesis/request.ts'
import { fixed } from '../../ui/number-format.ts'
import { decimalsFor } from '../../ui/plot/plot-numbers.ts'

/** One prefix and one number of decimals a column; resistors with every digit that they are sold by. */
export type ResistorFormat = { ohm: number; step: number; stepPer: number; stepUnit: string }

export function resistorFormat(rows: readonly NetworkCandidate[], outputPerV: number): ResistorFormat {
  const kilo = rows.flatMap(({ network }) => ohmsOf(network).map((ohm) => ohm / 1e3))
  const steps = rows.map(({ stepV }) => stepV * outputPerV)
  const stepUnit = Math.min(...steps) < 1e-7 ? 'nV' : 'µV'
  const stepPer = stepUnit === 'nV' ? 1e9 : 1e6
  const least = Math.min(...steps) * stepPer
  return {
    ohm: Math.max(2, ...kilo.map(decimalsFor)),
    stepPer,
    stepUnit,
    step: least >= 100 ? 0 : least >= 10 ? 1 : 2,
  }
}

function ohmsOf(network: NetworkCandidate['network']): number[] {
  if (network.kind === 'direct') return []
  const all = [network.topOhm, network.kind === 'shifted' ? network.shiftOhm : undefined, network.bottomOhm]
  return all.filter((ohm) => ohm !== undefined && Number.isFinite(ohm)) as number[]
}

/** One number where both sides are alike to the last digit shown, the smaller of the two; else both ends. mV. */
export function nodeEnds(lowV: number, highV: number): string {
  const low = lowV * 1e3
  const high = highV * 1e3
  if (low < 0 && Math.abs(low + high) <= 0.002 * (high - low)) return `±${fixed(Math.min(-low, high), 1)}`
  return `${fixed(low, 1)} to ${fixed(high, 1)}`
}
