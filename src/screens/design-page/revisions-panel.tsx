import { useQuery } from '@tanstack/react-query'
import { type FormEvent, useState } from 'react'
import { designKey as designKeySchema } from '../../../shared/contract/primitives.ts'
import { DifferenceView } from '../../features/design/difference-view.tsx'
import { usageOptions } from '../../features/design/queries.ts'
import { RevisionTable } from '../../features/design/revision-table.tsx'
import { usageSentence } from '../../features/design/usage-words.ts'
import { Button } from '../../ui/button.tsx'
import { CopyButton } from '../../ui/copy-button.tsx'
import { Field } from '../../ui/field.tsx'
import { Select, TextInput } from '../../ui/input.tsx'
import { Problem } from '../../ui/problem.tsx'
import { Section } from '../../ui/section.tsx'
import type { DesignPageState } from './use-design-page.ts'
import type { RevisionActs } from './use-revision-acts.ts'

/** Revisions with who and when, two of them compared, what uses them, and a copy under another key. */
export default function RevisionsPanel({
  page,
  acts,
  compared,
  onCompare,
}: {
  page: DesignPageState
  acts: RevisionActs
  compared: number | null
  onCompare: (with_: number | null) => void
}) {
  const { line, designKey, number, revision } = page
  if (!line || number === null) return null
  const others = line.revisions.filter((one) => one.number !== number)
  return (
    <>
      {compared !== null ? (
        <Section
          title="Differences"
          side={
            <Field label="with revision" layout="inline">
              <Select
                value={compared}
                data-differences
                onChange={(event) => onCompare(Number(event.target.value))}
              >
                {others.map((one) => (
                  <option key={one.number} value={one.number}>
                    {one.number}
                  </option>
                ))}
              </Select>
            </Field>
          }
        >
          {page.isEditable && !page.isSaved ? (
            <p className="mb-1 text-small text-ink-2">What is not saved yet is not compared.</p>
          ) : null}
          <DifferenceView designKey={designKey} from={compared} to={number} />
        </Section>
      ) : null}
      <Section
        title={<span data-revisions>Revisions</span>}
        side={
          revision ? (
            <CopyButton text={revision.hash} what="hash of this revision">
              copy hash
            </CopyButton>
          ) : null
        }
      >
        <RevisionTable design={line} shown={number} />
        <Uses page={page} />
        {page.person.role === 'engineer' ? <CopyForm page={page} acts={acts} /> : null}
      </Section>
    </>
  )
}

function Uses({ page: { designKey } }: { page: DesignPageState }) {
  const { data } = useQuery(usageOptions(designKey))
  const used = data?.items.filter((one) => one.lots > 0 || one.units.count > 0) ?? []
  if (used.length === 0) return null
  return (
    <ul className="mt-1.5 space-y-0.5 text-body text-ink-2">
      {used.map((one) => (
        <li key={one.revision}>{`Revision ${one.revision}: ${usageSentence(one)}`}</li>
      ))}
    </ul>
  )
}

function CopyForm({ page, acts }: { page: DesignPageState; acts: RevisionActs }) {
  const [isOpen, setOpen] = useState(false)
  const [key, setKey] = useState('')
  const [wasTried, setTried] = useState(false)
  const { document } = page.answered
  if (!isOpen) {
    return (
      <Button look="quiet" className="mt-1" onClick={() => setOpen(true)} disabled={!page.answered.isGood}>
        Copy to a new key
      </Button>
    )
  }
  const checked = designKeySchema.safeParse(key.trim())
  const problem = checked.success ? null : (checked.error.issues[0]?.message ?? 'Key is missing.')
  const send = (event: FormEvent) => {
    event.preventDefault()
    setTried(true)
    if (checked.success && document) void acts.copyTo(checked.data, document)
  }
  return (
    <form onSubmit={send} className="mt-2 flex flex-wrap items-end gap-3">
      <Field label="New key" error={wasTried ? problem : null}>
        <TextInput autoFocus value={key} onChange={(event) => setKey(event.target.value)} />
      </Field>
      <Button type="submit" disabled={acts.isBusy}>
        Copy
      </Button>
      {acts.error ? <Problem error={acts.error} /> : null}
    </form>
  )
}
