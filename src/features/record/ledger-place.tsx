import type { ReactNode } from 'react'
import type { Record as TrimRecord } from '../../../shared/contract/record.ts'
import { CopyButton } from '../../ui/copy-button.tsx'
import { Whole } from '../../ui/number-text.tsx'
import { Fact, Facts, Section } from '../../ui/section.tsx'
import { TimeText } from '../../ui/time-text.tsx'

/** The signed receipt, and where the record stands in the ledger; `children` show the proof, once there is a place to prove. */
export function LedgerPlace({ record, children }: { record: TrimRecord; children: ReactNode }) {
  const { receipt, ledger } = record
  return (
    <Section
      title="Place in the ledger"
      side={
        <CopyButton text={JSON.stringify(receipt, null, 2)} what="receipt">
          copy receipt
        </CopyButton>
      }
    >
      <p className="mb-2 text-text">
        {ledger ? (
          <>
            {'Entry '}
            <Whole value={ledger.index} />
            {' of the ledger.'}
          </>
        ) : (
          <>
            {'Received '}
            <TimeText at={receipt.recordedAt} />
            {' UTC, receipt signed. Place in the ledger follows within a minute.'}
          </>
        )}
      </p>
      {ledger ? <div className="mb-3">{children}</div> : null}
      <Facts>
        <Fact name="leaf hash">
          <span className="font-mono text-small">{receipt.leaf}</span>
        </Fact>
        <Fact name="recorded">
          <TimeText at={receipt.recordedAt} /> UTC
        </Fact>
        <Fact name="included by">
          <TimeText at={receipt.includedBy} /> UTC, as promised
        </Fact>
        <Fact name="key">
          <span className="font-mono text-small">{receipt.key}</span>
        </Fact>
        <Fact name="signature">
          <span className="font-mono text-small">{receipt.signature}</span>
        </Fact>
        <Fact name="design hash">
          <span className="font-mono text-small">{record.designHash}</span>
        </Fact>
      </Facts>
    </Section>
  )
}
