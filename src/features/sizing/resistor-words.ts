import { ohms } from '../../../shared/design-words/words.ts'
import type { Network } from '../../../shared/solver/types.ts'

/** "R top 8.66 kΩ, R bottom 1.50 kΩ" */
export function networkName(network: Network): string {
  if (network.kind === 'direct') return 'direct'
  const parts = [`R top ${ohms(network.topOhm)}`]
  if (network.kind === 'shifted') parts.push(`R shift ${ohms(network.shiftOhm)}`)
  if (network.bottomOhm !== undefined && Number.isFinite(network.bottomOhm)) {
    parts.push(`R bottom ${ohms(network.bottomOhm)}`)
  }
  return parts.join(', ')
}
