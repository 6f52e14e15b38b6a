import { type FormEvent, useState } from 'react'
import type { LotDetail, LotUnit } from '../../../shared/contract/lots.ts'
import { isOgeeError } from '../../../shared/errors.ts'
import { limits } from '../../../shared/limits.ts'
import { useDraft } from '../../lib/use-draft.ts'
import { Button } from '../../ui/button.tsx'
import { Dialog } from '../../ui/dialog.tsx'
import { Field } from '../../ui/field.tsx'
import { TextArea, TextInput } from '../../ui/input.tsx'
import { Problem } from '../../ui/problem.tsx'
import { announce } from '../../ui/status.tsx'
import { useSignOff } from './queries.ts'
import { isUndecided, StandingWord } from './standing-word.tsx'
import { percent, unitsText } from './words.ts'

/** Units that get a field of their own; the rest share one reason. */
const shownMost = 12

/** What was typed: the reasons by unit, the one that the rest shares, and the note. */
type Typed = { reasons: Record<string, string>; rest: string; note: string }
const nothing: Typed = { reasons: {}, rest: '', note: '' }

function typedIn(stored: unknown): Typed | null {
  if (typeof stored !== 'object' || stored === null) return null
  const { reasons, rest, note } = stored as { [field in keyof Typed]?: unknown }
  if (typeof reasons !== 'object' || reasons === null) return null
  if (typeof rest !== 'string' || typeof note !== 'string') return null
  const texts = Object.entries(reasons).filter(([, reason]) => typeof reason === 'string')
  return { reasons: Object.fromEntries(texts), rest, note }
}

type Props = { lot: LotDetail; units: readonly LotUnit[]; onClose: () => void }

/**
 * Every unit that is not right gets a decision: it is left out, for a reason that is kept for good. What was typed is a draft on
 * this computer, for a record that comes in makes the server refuse and the dialog has to be opened again.
 */
export default function SignOffDialog({ lot, units, onClose }: Props) {
  const open = units.filter((unit) => isUndecided(unit))
  const listed = open.slice(0, shownMost)
  const others = open.length - listed.length + lot.counts.missing
  const draft = `draft.sign-off.${lot.design}/${lot.key}`
  const [typed, setTyped, discard] = useDraft(draft, typedIn, nothing)
  const { reasons, rest, note } = typed
  const [tried, setTried] = useState(false)
  // As it was seen when the dialog was opened: what is recorded meanwhile makes the server refuse.
  const [etag] = useState(lot.etag)
  const signOff = useSignOff({ key: lot.design, lot: lot.key }, etag)
  const short = (reason: string | undefined) => [...(reason ?? '').trim()].length < limits.reasonMin
  const errorOf = (reason: string | undefined) =>
    tried && short(reason) ? `At least ${limits.reasonMin} characters.` : undefined
  const submit = (event: FormEvent) => {
    event.preventDefault()
    setTried(true)
    const isShort = listed.some(({ unit }) => short(reasons[unit])) || (others > 0 && short(rest))
    if (isShort || signOff.isPending) return
    signOff.mutate(
      {
        ...(note.trim() === '' ? {} : { note: note.trim() }),
        leaveOut: listed.map(({ unit }) => ({ unit, reason: (reasons[unit] ?? '').trim() })),
        ...(others > 0 ? { rest: { reason: rest.trim() } } : {}),
      },
      {
        onSuccess: () => {
          discard()
          announce(`Lot ${lot.key} is signed off.`)
          onClose()
        },
      },
    )
  }
  const { counts } = lot
  return (
    <Dialog title={`Sign off lot ${lot.key}`} onClose={onClose}>
      <form onSubmit={submit} noValidate className="space-y-3">
        <p>
          {`${counts.good} of ${unitsText(counts.units)} good, yield ${percent(counts.share)}. `}
          {open.length + counts.missing === 0
            ? 'Nothing needs a decision. '
            : `Left out of the lot: ${unitsText(open.length + counts.missing)}. `}
          Signing off closes the lot for good and goes into the ledger with your name.
        </p>
        {listed.map(({ unit, standing }) => (
          <Field
            key={unit}
            error={errorOf(reasons[unit])}
            label={
              <>
                {`Unit ${unit}: `}
                <StandingWord standing={standing} />
              </>
            }
          >
            <TextInput
              placeholder="Why it is left out"
              maxLength={limits.reasonMax}
              value={reasons[unit] ?? ''}
              onChange={(event) =>
                setTyped({ ...typed, reasons: { ...reasons, [unit]: event.target.value } })
              }
            />
          </Field>
        ))}
        {others > 0 ? (
          <Field
            label={`${unitsText(others)} more${lot.counts.missing > 0 ? `, ${lot.counts.missing} of them expected and not recorded` : ''}`}
            error={errorOf(rest)}
          >
            <TextInput
              placeholder="Why they are left out"
              maxLength={limits.reasonMax}
              value={rest}
              onChange={(event) => setTyped({ ...typed, rest: event.target.value })}
            />
          </Field>
        ) : null}
        <Field label="Note" hint="May be left out.">
          <TextArea
            maxLength={limits.noteMax}
            value={note}
            onChange={(event) => setTyped({ ...typed, note: event.target.value })}
          />
        </Field>
        <Problem error={signOff.error} />
        {isOgeeError(signOff.error, 'precondition-failed') ? (
          <p>Close this, look again, then sign off.</p>
        ) : null}
        <div className="flex gap-3">
          <Button look="primary" type="submit" disabled={signOff.isPending}>
            Sign off
          </Button>
          <Button onClick={onClose}>Cancel</Button>
        </div>
      </form>
    </Dialog>
  )
}
