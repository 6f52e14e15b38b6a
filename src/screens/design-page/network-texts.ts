import type { Network } from '../../../shared/solver/types.ts'
import { ohmShort, voltText } from '../../features/design-form/exact-text.ts'
import type { Which } from '../../features/design-form/form-doc.ts'

/** The values of a suggested network as texts of the form. */
export function networkTexts(which: Which, network: Network): Record<string, string> {
  if (network.kind === 'direct') return { [`${which}.network`]: 'direct' }
  if (network.kind === 'divider') {
    return {
      [`${which}.network`]: 'divider',
      [`${which}.rs`]: `${ohmShort(network.topOhm)} / ${ohmShort(network.bottomOhm)}`,
    }
  }
  const rs = [network.topOhm, network.shiftOhm, network.bottomOhm]
  return {
    [`${which}.network`]: 'shifted',
    [`${which}.rs3`]: rs.flatMap((r) => (r === undefined ? [] : [ohmShort(r)])).join(' / '),
    [`${which}.shift`]: voltText(network.shiftV),
  }
}
