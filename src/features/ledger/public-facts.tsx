import { useQuery } from '@tanstack/react-query'
import { NumberText } from '../../ui/number-text.tsx'
import { readCheckpoint, readVerifierKey } from './note.ts'
import { checkpointOptions, ledgerKeyOptions } from './queries.ts'

/** What an outsider may know, without signing in. */
export function PublicFacts() {
  const checkpoint = useQuery(checkpointOptions)
  const key = useQuery(ledgerKeyOptions)
  const head = checkpoint.data === undefined ? null : readCheckpoint(checkpoint.data)
  const verifier = key.data === undefined ? null : readVerifierKey(key.data)
  if (!head && !verifier) return null
  return (
    <section aria-label="Ledger" className="border-t border-hair pt-2 text-small text-ink-2">
      <dl className="grid grid-cols-[5.5rem_1fr] [&_dd]:font-mono [&_dd]:text-plot [&_dd]:leading-4 [&_dd]:break-all">
        {head ? (
          <>
            <dt>ledger</dt>
            <dd>
              {head.origin},{' '}
              <span className="whitespace-nowrap">
                <NumberText>{String(head.size)}</NumberText> {head.size === 1 ? 'entry' : 'entries'}
              </span>
            </dd>
            <dt>root</dt>
            <dd>{head.rootHex}</dd>
          </>
        ) : null}
        {verifier ? (
          <>
            <dt>key</dt>
            <dd>ed25519 {verifier.publicHex}</dd>
          </>
        ) : null}
      </dl>
      <p className="mt-1.5">Keep these to check later that nothing was changed. No sign-in needed.</p>
    </section>
  )
}
