import { useEffect, useMemo, useRef, useState } from 'react'
import { stateWord } from '../../features/design/state-word.ts'
import { TextCell } from '../../features/design-form/cells.tsx'
import { FormContext } from '../../features/design-form/form-context.ts'
import { textOf } from '../../features/design-form/form-doc.ts'
import { jumpToPart } from '../../features/design-form/part.tsx'
import { useKeys } from '../../lib/keys.ts'
import { Button } from '../../ui/button.tsx'
import { PageHead } from '../../ui/page-head.tsx'
import { utcText } from '../../ui/time-text.tsx'
import { AnswerColumn } from './answer-column.tsx'
import { FormColumn } from './form-column.tsx'
import { HeadActs } from './head-acts.tsx'
import { Notices } from './notices.tsx'
import { type DesignPageState, type Start, useDesignPage } from './use-design-page.ts'
import { useRevisionActs } from './use-revision-acts.ts'

/** The whole page of a design: the form at the left, the answer always in view at the right. */
export function DesignPage({ start }: { start: Start }) {
  const page = useDesignPage(start)
  const acts = useRevisionActs(page.designKey, page.number)
  const [compared, setCompared] = useState<number | null>(null)
  const links = useMemo(
    () => ({ store: page.store, isReadOnly: !page.isEditable }),
    [page.store, page.isEditable],
  )
  const isNew = start.revision === null
  useEffect(() => {
    if (isNew) jumpToPart(1)
  }, [isNew])
  const latest = useRef(page)
  latest.current = page
  const submit = async () => {
    // The last keys belong to it.
    page.catchUp()
    const { isEditable, isTried, draft } = latest.current
    if (!isEditable || isTried || acts.isBusy) return
    const saved = await draft.saveNow()
    if (saved) await acts.submit(saved.etag)
  }
  const differences = () => {
    setCompared(compared === null ? otherRevision(page) : compared)
    show('[data-differences]')
  }
  const revisions = () => show('[data-revisions]')
  usePageKeys(page, { submit: () => void submit(), differences, revisions })
  return (
    <FormContext value={links}>
      <div className="design-page flex flex-col wide:h-[calc(100dvh-2rem)] print:block print:h-auto">
        <PageHead
          place={`Design ${page.designKey}`}
          title={<Title page={page} />}
          tab={textOf(page.form.doc, 'title') || page.designKey}
          state={<State page={page} />}
          acts={
            <HeadActs
              page={page}
              acts={acts}
              onDifferences={differences}
              onRevisions={revisions}
              onSubmit={() => void submit()}
            />
          }
        />
        <Notices page={page} acts={acts} />
        <div className="mt-2 flex min-h-0 grow flex-col gap-x-7 gap-y-3.5 wide:grid wide:grid-cols-[24.25rem_minmax(0,1fr)] print:flex">
          <div className="order-3 min-w-0 wide:order-none wide:overflow-y-auto wide:pr-2 print:overflow-visible">
            <FormColumn page={page} />
          </div>
          <AnswerColumn page={page} acts={acts} compared={compared} onCompare={setCompared} />
        </div>
      </div>
    </FormContext>
  )
}

/** The released revision, else the newest of the others. */
function otherRevision({ line, number }: DesignPageState): number | null {
  const others = line?.revisions.map((one) => one.number).filter((one) => one !== number) ?? []
  const { released } = line ?? {}
  return released && others.includes(released) ? released : others.length > 0 ? Math.max(...others) : null
}

/** A part of the revisions, which load once they are near; after React has drawn it. */
function show(selector: string): void {
  let tries = 20
  document.querySelector('[data-when-near=revisions]')?.scrollIntoView({ block: 'start' })
  const look = () => {
    const found = document.querySelector<HTMLElement>(selector)
    if (found) {
      found.scrollIntoView({ block: 'start' })
      found.focus()
    } else if (tries-- > 0) setTimeout(look, 50)
  }
  requestAnimationFrame(look)
}

function Title({ page }: { page: DesignPageState }) {
  const [isOpen, setOpen] = useState(false)
  const title = textOf(page.form.doc, 'title')
  const problem = page.answered.said.problems.get('title')
  if (!page.isEditable || !(isOpen || problem)) {
    return (
      <>
        {title}
        {page.isEditable ? (
          <Button look="quiet" className="ml-2 !text-small font-normal" onClick={() => setOpen(true)}>
            rename
          </Button>
        ) : null}
      </>
    )
  }
  return (
    <span className="block w-80 text-body">
      <TextCell field="title" label="Title" problem={problem} placeholder="Title" />
    </span>
  )
}

function State({ page }: { page: DesignPageState }) {
  const { revision, number, draft, differs, isSaved } = page
  const parts: string[] = []
  if (revision) {
    const by = revision.state === 'draft' || revision.state === 'in-review' ? ` by ${revision.author}` : ''
    parts.push(`revision ${number}, ${stateWord(revision.state)}${by}`)
  } else parts.push('new design, not saved yet')
  if (differs) {
    parts.push(
      `${differs.fields} ${differs.fields === 1 ? 'field differs' : 'fields differ'} from released ${differs.released}`,
    )
  }
  if (page.isEditable) {
    const at = draft.saved ? utcText(draft.saved.at).slice(11) : null
    if (draft.state.is === 'waiting') parts.push(`kept on this computer: ${draft.state.why}`)
    else if (draft.state.is === 'saving') parts.push('saving')
    else if (isSaved && at) parts.push(`saved ${at}`)
    else parts.push('kept on this computer')
  }
  return parts.join(' · ')
}

type Acts = { submit: () => void; differences: () => void; revisions: () => void }

function usePageKeys(page: DesignPageState, acts: Acts): void {
  const { dispatch } = page
  useKeys([
    ...[1, 2, 3, 4, 5].map((part) => ({
      keys: String(part),
      does: `to ${['the channel', 'the adjusters', 'the error budget', 'sizing and target', 'measurement and decision'][part - 1]}`,
      run: () => jumpToPart(part),
    })),
    { keys: 'r', does: 'to the revisions', run: acts.revisions },
    { keys: 'd', does: 'differences', run: acts.differences },
    { keys: 'Ctrl+Z', does: 'undoes', run: () => dispatch({ do: 'undo' }) },
    { keys: 'Ctrl+Y', does: 'does again', run: () => dispatch({ do: 'redo' }) },
    { keys: 'Ctrl+Enter', does: 'sends to review', run: acts.submit },
  ])
}
