import { useQuery } from '@tanstack/react-query'
import { useSearchParams } from 'react-router-dom'
import type { KeyStatement } from '../../../shared/contract/proof.ts'
import { parseVerifierKey } from '../../../shared/ledger/checkpoint.ts'
import { checkpointsOptions, comparisonOptions } from '../../features/ledger/checkpoint-queries.ts'
import { CheckpointTable, type Sizes } from '../../features/ledger/checkpoint-table.tsx'
import { Comparison } from '../../features/ledger/comparison.tsx'
import { useKeys } from '../../lib/keys.ts'
import { sha256 } from '../../lib/sha256.ts'
import { Button } from '../../ui/button.tsx'
import { Caution } from '../../ui/caution.tsx'
import { KeyHint } from '../../ui/key-hint.tsx'
import { Loading } from '../../ui/loading.tsx'
import { Whole } from '../../ui/number-text.tsx'
import { Problem } from '../../ui/problem.tsx'
import { Section } from '../../ui/section.tsx'
import { usePicked } from './use-picked.ts'

/** Checkpoints in pages, two of them chosen, and the proof between those: the address holds all of it. */
export function Checkpoints({
  verifierKey,
  changes,
}: {
  verifierKey: string | null
  changes: readonly KeyStatement[] | null
}) {
  const [search, setSearch] = useSearchParams()
  const after = search.get('after') ?? undefined
  const page = useQuery(checkpointsOptions(after))
  const { chosen, pair, unknown, choose } = usePicked()
  const key = verifierKey === null ? null : parseVerifierKey(sha256, verifierKey)
  const compared = useQuery(comparisonOptions(pair, key, changes))
  const turn = (to: string | null) => {
    const next = new URLSearchParams(search)
    if (to === null) next.delete('after')
    else next.set('after', to)
    setSearch(next)
  }
  const next = page.isPlaceholderData ? null : (page.data?.next ?? null)
  const older = () => {
    if (next !== null) turn(next)
  }
  const newest = () => turn(null)
  useKeys([
    { keys: ']', does: 'older checkpoints', run: older },
    { keys: '[', does: 'newest checkpoints', run: newest },
  ])
  return (
    <div className="mt-3.5 grid grid-cols-1 gap-x-7 gap-y-3.5 wide:grid-cols-2">
      <Section title="Checkpoints" note="at most one a second, when something was recorded">
        {page.error ? <Problem error={page.error} /> : null}
        {page.isPending ? <Loading>Reading the checkpoints.</Loading> : null}
        {page.data ? (
          <CheckpointTable checkpoints={page.data.items} chosen={chosen} onChoose={choose} />
        ) : null}
        <nav aria-label="Pages of checkpoints" className="mt-3 flex flex-wrap gap-3">
          {after === undefined ? null : (
            <Button onClick={newest}>
              Newest <KeyHint keys="[" />
            </Button>
          )}
          {next === null ? null : (
            <Button onClick={older}>
              Older <KeyHint keys="]" />
            </Button>
          )}
        </nav>
      </Section>
      <Section title="Between two checkpoints" note={noteOf(chosen)}>
        {unknown === null ? null : (
          <Caution>
            {'No checkpoint is over '}
            <Whole value={unknown} />
            {' entries. Take one of the list.'}
          </Caution>
        )}
        <Comparison
          compared={pair ? compared.data : undefined}
          error={pair ? compared.error : null}
          isReading={pair !== null && compared.isFetching}
        />
      </Section>
    </div>
  )
}

const noteOf = ({ from, to }: Sizes) =>
  from !== null && to !== null ? `from ${from} to ${to} entries` : null
