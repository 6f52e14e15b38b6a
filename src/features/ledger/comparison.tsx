import { Caution } from '../../ui/caution.tsx'
import { Loading } from '../../ui/loading.tsx'
import { Whole } from '../../ui/number-text.tsx'
import { Problem } from '../../ui/problem.tsx'
import { Verdict } from '../../ui/verdict.tsx'
import type { Compared } from './checkpoint-queries.ts'
import { proofRows } from './proof-parts.ts'
import { ProofPicture } from './proof-picture.tsx'

/** Whether the newer of two checkpoints continues the older one, in words and drawn. */
export function Comparison({
  compared,
  error,
  isReading,
}: {
  compared: Compared | undefined
  error: unknown
  isReading: boolean
}) {
  if (error) return <Problem error={error} />
  if (isReading) return <Loading>Reading the proof.</Loading>
  if (!compared) {
    return (
      <p className="text-text">
        Take one checkpoint as the older and one as the newer. The proof between them shows whether history
        was only added to.
      </p>
    )
  }
  const { from, to, path, fault } = compared
  if (fault !== null) {
    return (
      <Caution tone="bad">
        <Verdict verdict="fail" word="does not check" /> {fault} Tell whoever keeps the ledger.
      </Caution>
    )
  }
  return (
    <>
      <p className="text-text">
        <Verdict verdict="pass" word="proof checks" />
        {' The ledger of '}
        <Whole value={to} />
        {' entries begins with that of '}
        <Whole value={from} />
        {from === to ? ': they are the same.' : '. Nothing was changed or taken out between the two.'}
        {path.length === 0
          ? ' Checked in this browser.'
          : ` Checked in this browser, from ${path.length === 1 ? '1 hash' : `${path.length} hashes`}.`}
      </p>
      {path.length > 0 ? <ProofPicture from={from} to={to} rows={proofRows(from, to, path)} /> : null}
    </>
  )
}
