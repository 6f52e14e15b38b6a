import { useState } from 'react'
import type { Revision } from '../../../shared/contract/designs.ts'
import { stateWord } from '../../features/design/state-word.ts'
import { both, countDifferences, type FormDoc } from '../../features/design-form/form-doc.ts'
import { toForm } from '../../features/design-form/to-form.ts'
import { differenceOf } from '../../features/design-form/what-if.ts'
import { Button } from '../../ui/button.tsx'
import { Caution } from '../../ui/caution.tsx'
import { None, RowHead, Table, Td, Th } from '../../ui/table.tsx'
import { utcText } from '../../ui/time-text.tsx'

/** Two people in one draft: who saved what meanwhile, and a clear choice. Nothing typed is lost either way. */
export default function ConflictBar({
  theirs,
  mine,
  onTheirs,
  onNewDraft,
}: {
  theirs: Revision
  mine: FormDoc
  onTheirs: () => void
  onNewDraft: () => void
}) {
  const [isShown, setShown] = useState(false)
  const form = toForm(theirs.document)
  const count = countDifferences(form, mine)
  const did =
    theirs.state === 'draft'
      ? `${theirs.savedBy} saved this draft at ${utcText(theirs.savedAt).slice(11)} UTC, after you opened it.`
      : `This revision is ${stateWord(theirs.state)} now; it no longer changes.`
  return (
    <Caution>
      <div role="alert" className="flex flex-wrap items-center gap-x-3 gap-y-1">
        <p>{`${did} Differences: ${count} ${count === 1 ? 'field' : 'fields'}.`}</p>
        <Button look="quiet" aria-expanded={isShown} onClick={() => setShown(!isShown)}>
          {isShown ? 'Hide' : 'Show'}
        </Button>
        <Button onClick={onNewDraft}>Keep mine as a new draft</Button>
        <Button look="quiet" onClick={onTheirs}>
          Take theirs
        </Button>
      </div>
      {isShown ? <Fields theirs={form} mine={mine} by={theirs.savedBy} /> : null}
    </Caution>
  )
}

function Fields({ theirs, mine, by }: { theirs: FormDoc; mine: FormDoc; by: string }) {
  const change = differenceOf(theirs, mine)
  const rows = Object.entries(change.values ?? {}).map(([name, text]) => [
    name,
    theirs.values[name] ?? '',
    text,
  ])
  for (const which of both) {
    if (change[which]) {
      const said = (doc: FormDoc) => doc.lines[which].map((line) => `${line.name} ${line.limit}`).join('; ')
      rows.push([`budget, ${which}`, said(theirs), said(mine)])
    }
  }
  if (change.ranges) {
    const said = (doc: FormDoc) => doc.ranges.map((range) => `${range.name} ${range.ends}`).join('; ')
    rows.push(['ranges', said(theirs), said(mine)])
  }
  return (
    <Table caption="Fields that differ" className="mt-1">
      <thead>
        <tr>
          <Th>field</Th>
          <Th>{by}</Th>
          <Th>yours</Th>
        </tr>
      </thead>
      <tbody>
        {rows.map(([name, other, own]) => (
          <tr key={name}>
            <RowHead className="!font-normal">{name}</RowHead>
            <Td>{other || <None />}</Td>
            <Td>{own || <None />}</Td>
          </tr>
        ))}
      </tbody>
    </Table>
  )
}
