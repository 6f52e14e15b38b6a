import { lazy, Suspense, useState } from 'react'
import type { Design } from '../../../shared/contract/design.ts'
import type { LotDetail, LotUnit } from '../../../shared/contract/lots.ts'
import { downloadCodes } from '../../features/lot/codes-file.ts'
import { useCloseLot } from '../../features/lot/queries.ts'
import { stateWords } from '../../features/lot/words.ts'
import { usePerson } from '../../features/session/use-person.ts'
import { paths } from '../../lib/paths.ts'
import { Button, LinkButton } from '../../ui/button.tsx'
import { Dialog } from '../../ui/dialog.tsx'
import { PageHead } from '../../ui/page-head.tsx'
import { Problem } from '../../ui/problem.tsx'
import { utcText } from '../../ui/time-text.tsx'

// Asked for by a click: not in what the page loads first.
const ExpectDialog = lazy(() => import('../../features/lot/expect-dialog.tsx'))
const SignOffDialog = lazy(() => import('../../features/lot/sign-off-dialog.tsx'))

type Props = {
  lot: LotDetail
  title: string
  document: Design | undefined
  units: readonly LotUnit[]
  onAdd: () => void
}

/** What the lot is, its state, the acts that its reader may do; an auditor's are absent and not grey. */
export function LotHead({ lot, title, document, units, onAdd }: Props) {
  const { role } = usePerson()
  const [asking, setAsking] = useState<'close' | 'expect' | 'sign-off' | null>(null)
  const isOpen = lot.state === 'open'
  const mayRun = role === 'engineer' || role === 'operator'
  const hasCodes =
    document !== undefined && units.some(({ places }) => places.some(({ codes }) => codes !== null))
  const leftOut = new Set(lot.signOff?.leftOut.map(({ unit }) => unit))
  const save = (format: 'csv' | 'ndjson') =>
    document && downloadCodes(`${lot.design}-${lot.key}-codes`, format, document, units, leftOut)
  return (
    <>
      <PageHead
        place={
          <>
            <LinkButton className="min-h-6" to={paths.lots}>
              Lots
            </LinkButton>
            {` of ${lot.design}`}
          </>
        }
        title={lot.key}
        tab={`Lot ${lot.key}`}
        state={<State lot={lot} title={title} />}
        acts={
          <>
            <LinkButton to={paths.historyFor({ design: lot.design, lot: lot.key })}>Records</LinkButton>
            {hasCodes ? (
              <span className="inline-flex items-center gap-1">
                Codes
                <Button look="quiet" onClick={() => save('csv')}>
                  CSV
                </Button>
                <Button look="quiet" onClick={() => save('ndjson')}>
                  NDJSON
                </Button>
              </span>
            ) : null}
            {mayRun && isOpen ? (
              <>
                <Button onClick={() => setAsking('expect')}>Expect units</Button>
                <Button onClick={onAdd}>Add units</Button>
                <Button onClick={() => setAsking('close')}>Close lot</Button>
              </>
            ) : null}
            {role === 'engineer' && lot.state !== 'signed-off' && units.length > 0 ? (
              <Button look="primary" onClick={() => setAsking('sign-off')}>
                Sign off lot
              </Button>
            ) : null}
          </>
        }
      />
      <Suspense fallback={null}>
        {asking === 'expect' ? <ExpectDialog lot={lot} onClose={() => setAsking(null)} /> : null}
        {asking === 'close' ? <CloseDialog lot={lot} onClose={() => setAsking(null)} /> : null}
        {asking === 'sign-off' ? (
          <SignOffDialog lot={lot} units={units} onClose={() => setAsking(null)} />
        ) : null}
      </Suspense>
    </>
  )
}

function State({ lot, title }: { lot: LotDetail; title: string }) {
  const { counts, expected, firstAt, lastAt } = lot
  const many =
    expected === null ? `${counts.units} units` : `${expected - counts.missing} of ${expected} units`
  const day = firstAt === null || lastAt === null ? '' : `, ${spanText(firstAt, lastAt)}`
  return (
    <>
      {title === '' ? '' : `${title} · `}
      <LinkButton className="min-h-6" to={paths.design(lot.design, lot.revision)}>
        {`${lot.design} ${lot.revisionState} ${lot.revision}`}
      </LinkButton>
      {` · ${many}${day} · ${stateWords[lot.state]}`}
    </>
  )
}

/** "2026-11-24 12:58 to 16:22", UTC; the day again where it is another. */
function spanText(from: string, to: string): string {
  const [first, last] = [utcText(from).slice(0, 16), utcText(to).slice(0, 16)]
  if (first === last) return first
  return `${first} to ${first.slice(0, 10) === last.slice(0, 10) ? last.slice(11) : last}`
}

function CloseDialog({ lot, onClose }: { lot: LotDetail; onClose: () => void }) {
  const close = useCloseLot({ key: lot.design, lot: lot.key })
  return (
    <Dialog title={`Close lot ${lot.key}`} onClose={onClose}>
      <p>
        A closed lot takes no further record and is never open again. What a station has not sent yet is then
        refused. Signing off comes after, or closes it too.
      </p>
      <div className="mt-3 space-y-3">
        <Problem error={close.error} />
        <div className="flex gap-3">
          <Button
            look="primary"
            disabled={close.isPending}
            onClick={() => close.mutate(undefined, { onSuccess: onClose })}
          >
            Close the lot
          </Button>
          <Button data-first onClick={onClose}>
            Cancel
          </Button>
        </div>
      </div>
    </Dialog>
  )
}
