import type { LedgerReport } from '../../../shared/ledger/check/check-ledger.ts'
import { paths } from '../../lib/paths.ts'
import { Button, LinkButton } from '../../ui/button.tsx'
import { Caution } from '../../ui/caution.tsx'
import { Whole } from '../../ui/number-text.tsx'
import { Section } from '../../ui/section.tsx'
import { Verdict } from '../../ui/verdict.tsx'
import type { Kept } from './kept.ts'
import {
  type CheckState,
  type StartLedgerWorker,
  startBuiltWorker,
  useLedgerCheck,
} from './use-ledger-check.ts'

/** The whole ledger, read and computed again in this browser. */
export function CheckPanel({
  kept,
  verifierKey,
  startWorker = startBuiltWorker,
}: {
  /** What this browser kept from before; the check holds the ledger to it. */
  kept: Kept | null
  verifierKey: string | null
  /** Tests hand in a worker of their own. */
  startWorker?: StartLedgerWorker | undefined
}) {
  const { state, start, stop } = useLedgerCheck(startWorker)
  const key = kept?.key ?? verifierKey
  const run = () => {
    if (key === null) return
    const name = `the checkpoint that this browser keeps since ${kept?.since.slice(0, 10)}`
    void start({ key, kept: kept?.note ? [{ name, note: kept.note }] : [] })
  }
  return (
    <Section
      title="Check of the whole"
      side={
        state.is === 'running' ? (
          <Button onClick={stop}>Stop</Button>
        ) : (
          <Button onClick={run} disabled={key === null}>
            Check everything
          </Button>
        )
      }
    >
      <div className="max-w-[44rem] text-text" aria-live="polite">
        <Said state={state} />
      </div>
    </Section>
  )
}

function Said({ state }: { state: CheckState }) {
  if (state.is === 'idle') {
    return (
      <p>
        Reads every entry, hashes it here, and compares tree, checkpoints, records and receipts. A million
        entries take some minutes; the command line is quicker:{' '}
        <code className="font-mono">ogee ledger check</code>
      </p>
    )
  }
  if (state.is === 'failed') return <Caution tone="bad">{state.message}</Caution>
  if (state.is === 'done') return <Report report={state.report} />
  return (
    <p>
      {'Checking, '}
      <Whole value={state.done} />
      {state.size === null ? null : (
        <>
          {' of '}
          <Whole value={state.size} />
        </>
      )}
      {' entries.'}
    </p>
  )
}

function Report({ report }: { report: LedgerReport }) {
  const { ok, size, records, checkpoints, found, faults } = report
  if (ok) {
    return (
      <p>
        <Verdict verdict="pass" word="everything agrees" /> <Whole value={size} />
        {' entries, of them '}
        <Whole value={records} />
        {' records, under '}
        <Whole value={checkpoints} />
        {' checkpoints. Checked in this browser.'}
      </p>
    )
  }
  return (
    <>
      <p>
        <Verdict verdict="fail" word="does not check" />
        {' First, of '}
        <Whole value={found} />
        {found === 1 ? ' disagreement:' : ' disagreements:'}
      </p>
      <ul className="my-1.5 space-y-1">
        {faults.slice(0, shown).map(({ message, record }) => (
          <li key={message} className="border-l-3 border-bad pl-2.5 [overflow-wrap:anywhere]">
            {message} {record ? <LinkButton to={paths.record(record)}>record</LinkButton> : null}
          </li>
        ))}
      </ul>
      <p>Do not rely on these. Tell whoever keeps the ledger.</p>
    </>
  )
}

const shown = 20
