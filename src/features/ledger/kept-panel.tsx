import { useQuery } from '@tanstack/react-query'
import type { KeyStatement } from '../../../shared/contract/proof.ts'
import type { LedgerKey } from '../../../shared/ledger/checkpoint.ts'
import { Button } from '../../ui/button.tsx'
import { Section } from '../../ui/section.tsx'
import { TimeText } from '../../ui/time-text.tsx'
import { comparisonOptions } from './checkpoint-queries.ts'
import { Comparison } from './comparison.tsx'
import type { Kept } from './kept.ts'

/** The checkpoint and key that this browser kept, held against the newest. */
export function KeptPanel({
  kept,
  ledgerKey,
  newest,
  changes,
  onKeep,
  onForget,
}: {
  kept: Kept | null
  /** The kept key, read. */
  ledgerKey: LedgerKey | null
  newest: string
  changes: readonly KeyStatement[] | null
  onKeep: () => void
  onForget: () => void
}) {
  const pair = kept && {
    older: { name: 'The checkpoint kept here', note: kept.note },
    newer: { name: 'The newest checkpoint', note: newest },
  }
  const compared = useQuery(comparisonOptions(pair, ledgerKey, changes))
  return (
    <Section
      title="Kept in this browser"
      note={
        kept ? (
          <>
            {'since '}
            <TimeText at={kept.since} />
            {' UTC'}
          </>
        ) : null
      }
      side={
        kept ? (
          <Button look="quiet" onClick={onForget}>
            forget
          </Button>
        ) : (
          <Button look="quiet" onClick={onKeep}>
            keep
          </Button>
        )
      }
    >
      {kept ? (
        <Comparison compared={compared.data} error={compared.error} isReading={compared.isPending} />
      ) : (
        <p className="max-w-[44rem] text-text">
          Nothing yet. Keep the newest checkpoint and the key here: each later visit then shows whether the
          ledger still contains them.
        </p>
      )}
    </Section>
  )
}
