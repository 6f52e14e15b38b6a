import { useQuery } from '@tanstack/react-query'
import type { Proof } from '../../../shared/contract/proof.ts'
import type { Record as TrimRecord } from '../../../shared/contract/record.ts'
import { NoSignatures } from '../../lib/ledger-crypto.ts'
import { Button } from '../../ui/button.tsx'
import { Caution } from '../../ui/caution.tsx'
import { download } from '../../ui/download.ts'
import { Loading } from '../../ui/loading.tsx'
import { Problem } from '../../ui/problem.tsx'
import { Verdict } from '../../ui/verdict.tsx'
import { checkRecord } from './check-record.ts'
import { keptKey } from './kept-key.ts'
import { ProofPath } from './proof-path.tsx'
import { ledgerKeyOptions, proofOptions } from './queries.ts'

/** The proof of a record, checked in this browser each time the page is opened. */
export default function RecordProof({ record }: { record: TrimRecord }) {
  const proof = useQuery(proofOptions(record.id))
  const key = useQuery(ledgerKeyOptions)
  const error = proof.error ?? key.error
  if (error) return <Problem error={error} />
  if (!proof.data || key.data === undefined) return <Loading>Reading the proof.</Loading>
  return <Checked record={record} proof={proof.data} offered={key.data} />
}

type CheckedProps = { record: TrimRecord; proof: Proof; offered: string }

function Checked({ record, proof, offered }: CheckedProps) {
  const check = useQuery({
    queryKey: ['ledger', 'check', record.id, proof.checkpoint],
    queryFn: () => checkRecord(record, proof, keptKey(offered)),
    retry: false,
  })
  if (check.error instanceof NoSignatures) {
    return (
      <p>
        {check.error.message} Keep the proof file and check it with{' '}
        <code className="font-mono text-small">ogee proof check</code>. <ProofFile {...{ record, proof }} />
      </p>
    )
  }
  if (check.error) return <Problem error={check.error} />
  if (!check.data) return <Loading>Checking the proof.</Loading>
  if (!check.data.ok) {
    return (
      <div role="alert">
        <Caution tone="bad">
          <Verdict verdict="fail" word="proof fails" /> {check.data.message} Do not rely on this record. Tell
          whoever keeps the ledger.
        </Caution>
        <p className="mt-2">
          Kept here since {check.data.kept.since}. <ProofFile {...{ record, proof }} />
        </p>
      </div>
    )
  }
  const { checked, steps, kept } = check.data
  return (
    <>
      <p className="mb-2 text-text">
        <Verdict verdict="pass" word="proof checks" /> Leaf, path and signed root agree. Checked in this
        browser with the public key kept here since {kept.since}. <ProofFile {...{ record, proof }} />
      </p>
      <ProofPath steps={steps} index={checked.index} size={checked.checkpoint.size} />
    </>
  )
}

function ProofFile({ record, proof }: Omit<CheckedProps, 'offered'>) {
  const save = () =>
    download(`proof-${record.number}.json`, `${JSON.stringify(proof, null, 2)}\n`, 'application/json')
  return (
    <Button look="quiet" onClick={save}>
      Proof file
    </Button>
  )
}
