import type { LotDetail } from '../../../shared/contract/lots.ts'
import { differs, StationSentence } from '../../features/lot/lot-sentences.tsx'
import { useComparison } from './use-comparison.ts'

/** Said at the head of the page when a station reads differently, or moves. */
export default function StationLine({ lot, range }: { lot: LotDetail; range: string }) {
  const { comparison } = useComparison(lot, range, 'gain')
  if (!comparison || !differs(comparison)) return null
  return <StationSentence comparison={comparison} what="gain" unit="ppm" />
}
