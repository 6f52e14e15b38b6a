import { Button } from '../../ui/button.tsx'
import { Caution } from '../../ui/caution.tsx'
import { CopyButton } from '../../ui/copy-button.tsx'
import { download } from '../../ui/download.ts'
import { Whole } from '../../ui/number-text.tsx'
import { Fact, Facts, Section } from '../../ui/section.tsx'
import { readCheckpoint, readVerifierKey } from './note.ts'

export function LedgerFacts({ checkpoint, verifierKey }: { checkpoint: string; verifierKey: string | null }) {
  const head = readCheckpoint(checkpoint)
  const key = verifierKey === null ? null : readVerifierKey(verifierKey)
  return (
    <div className="mt-3 grid grid-cols-1 gap-x-7 gap-y-3.5 wide:grid-cols-2">
      <Section
        title="Checkpoint"
        note="signed note"
        side={
          <>
            <CopyButton text={checkpoint} what="checkpoint">
              copy checkpoint
            </CopyButton>{' '}
            <Button look="quiet" onClick={() => download('checkpoint.txt', checkpoint, 'text/plain')}>
              download checkpoint
            </Button>
          </>
        }
      >
        {head ? (
          <Facts>
            <Fact name="ledger">{head.origin}</Fact>
            <Fact name="size">
              <Whole value={head.size} /> {head.size === 1 ? 'entry' : 'entries'}
            </Fact>
            <Fact name="root">
              <span className="font-mono text-small">{head.rootHex}</span>
            </Fact>
            <Fact name="signed by">{head.signers.join(', ') || 'nobody'}</Fact>
          </Facts>
        ) : (
          <Caution tone="bad">
            The server's checkpoint is no signed note. Tell whoever keeps the ledger.
          </Caution>
        )}
        <pre className="mt-3 border-t border-hair pt-2 font-mono text-small break-all whitespace-pre-wrap">
          {checkpoint}
        </pre>
      </Section>
      <Section
        title="Public key in force"
        note="the content of ogee.pub"
        side={
          verifierKey === null ? null : (
            <>
              <CopyButton text={verifierKey} what="public key">
                copy key
              </CopyButton>{' '}
              <Button look="quiet" onClick={() => download('ogee.pub', verifierKey, 'text/plain')}>
                download ogee.pub
              </Button>
            </>
          )
        }
      >
        {key ? (
          <Facts>
            <Fact name="name">{key.name}</Fact>
            <Fact name="key hash">
              <span className="font-mono text-small">{key.hash}</span>
            </Fact>
            <Fact name="ed25519">
              <span className="font-mono text-small">{key.publicHex}</span>
            </Fact>
          </Facts>
        ) : (
          <p className="text-ink-2">The key could not be read.</p>
        )}
        <p className="mt-3 max-w-[44rem] text-ink-2">
          Keep the key and a checkpoint outside this server. A later ledger must contain every entry under
          this root; what was changed, cut off or put elsewhere no longer leads to it.
        </p>
      </Section>
    </div>
  )
}
