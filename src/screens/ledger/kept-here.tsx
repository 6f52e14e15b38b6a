import type { KeyStatement } from '../../../shared/contract/proof.ts'
import { parseVerifierKey } from '../../../shared/ledger/checkpoint.ts'
import { KeptPanel } from '../../features/ledger/kept-panel.tsx'
import { sha256 } from '../../lib/sha256.ts'
import type { KeptHere as Keeping } from './use-kept.ts'

export function KeptHere({
  kept,
  note,
  verifierKey,
  changes,
}: {
  kept: Keeping
  note: string
  verifierKey: string | null
  changes: readonly KeyStatement[] | null
}) {
  return (
    <KeptPanel
      kept={kept.value}
      ledgerKey={kept.value && parseVerifierKey(sha256, kept.value.key)}
      newest={note}
      changes={changes}
      onKeep={() => {
        if (verifierKey !== null) kept.keep(verifierKey, note)
      }}
      onForget={kept.forget}
    />
  )
}
