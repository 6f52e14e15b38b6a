import { useQuery } from '@tanstack/react-query'
import { useEffect, useMemo, useState } from 'react'
import { useSearchParams } from 'react-router-dom'
import type { Revision } from '../../../shared/contract/designs.ts'
import { designOptions, revisionOptions } from '../../features/design/queries.ts'
import { countDifferences, type FormDoc } from '../../features/design-form/form-doc.ts'
import { formReducer, startForm } from '../../features/design-form/form-state.ts'
import { createFormStore } from '../../features/design-form/form-store.ts'
import { draftName, readDraft, useKeptDraft } from '../../features/design-form/kept-draft.ts'
import { toForm } from '../../features/design-form/to-form.ts'
import { differenceOf, hashOf, whatIfOf, withWhatIf } from '../../features/design-form/what-if.ts'
import { usePerson } from '../../features/session/use-person.ts'
import { paths } from '../../lib/paths.ts'
import { createLiveAnswer } from './live-answer.ts'
import { useFormAnswer } from './use-form-answer.ts'
import { useServerDraft } from './use-server-draft.ts'

/** What the page opens with: a revision, or the texts of a design that the server does not have yet. */
export type Start =
  | { designKey: string; revision: Revision; doc?: undefined }
  | { designKey: string; revision: null; doc: FormDoc }

/** Everything that the parts of the Design page share. */
export function useDesignPage(start: Start) {
  const { designKey } = start
  const person = usePerson()
  const [number, setNumber] = useState(start.revision?.number ?? null)
  const line = useQuery({ ...designOptions(designKey), enabled: number !== null }).data ?? null
  const asked = useQuery({ ...revisionOptions(designKey, number ?? 1), enabled: number !== null })
  const revision = asked.data ?? start.revision
  const isEditable = person.role === 'engineer' && (revision === null || revision.state === 'draft')

  const { opened, store, live } = useState(() => begun(openedWith(start, isEditable)))[0]
  const [search, setSearch] = useSearchParams()
  const range = search.get('range')
  const { view: form, answered, catchUp } = useFormAnswer(live, range)
  const isTried = form.before !== null
  const draft = useServerDraft({
    designKey,
    revision: start.revision,
    startEtag: opened.etag,
    document: isEditable && !isTried ? answered.document : null,
  })
  const created = draft.saved?.number ?? null
  useEffect(() => {
    if (number !== null || created === null) return
    setNumber(created)
    // The address of what now exists, without drawing the page anew: whoever types goes on typing.
    window.history.replaceState(window.history.state, '', paths.design(designKey, created))
  }, [number, created, designKey])

  const isSaved = draft.saved !== null && draft.saved.text === JSON.stringify(answered.document)
  useKeptDraft(draftName(designKey, number), store, {
    isEditable,
    saved: isSaved && !isTried ? form.doc : null,
    etag: draft.saved?.etag ?? null,
  })
  useWhatIfAddress(form.before, form.doc)
  const differs = useDiffersFromReleased(designKey, line?.released ?? null, number, form.doc)
  return {
    designKey,
    number,
    person,
    line,
    revision,
    isEditable,
    isTried,
    isSaved,
    form,
    store,
    dispatch: store.dispatch,
    live,
    range,
    answered,
    catchUp,
    draft,
    differs,
    setRange: (range: string) => setSearch({ range }, { replace: true }),
  }
}

export type DesignPageState = ReturnType<typeof useDesignPage>

function begun(opened: ReturnType<typeof openedWith>) {
  const first = startForm(opened.doc)
  const store = createFormStore(opened.tried ? formReducer(first, { do: 'try', doc: opened.tried }) : first)
  return { opened, store, live: createLiveAnswer(store) }
}

/** What was typed here and not saved goes first; then what the server has; a tried change of the address on top. */
function openedWith(start: Start, isEditable: boolean) {
  const name = draftName(start.designKey, start.revision?.number ?? null)
  const stored = isEditable ? readDraft(name) : null
  const doc = stored?.doc ?? start.doc ?? toForm(start.revision.document)
  const change = whatIfOf(window.location.hash)
  return {
    doc,
    etag: stored?.etag ?? start.revision?.etag ?? null,
    tried: change === null ? null : withWhatIf(doc, change),
  }
}

/** The address carries what is tried: behind `#`, so that no server sees it. */
function useWhatIfAddress(before: FormDoc | null, doc: FormDoc): void {
  const hash = useMemo(() => (before === null ? '' : hashOf(differenceOf(before, doc))), [before, doc])
  useEffect(() => {
    const { pathname, search } = window.location
    if (window.location.hash === hash) return
    window.history.replaceState(window.history.state, '', `${pathname}${search}${hash}`)
  }, [hash])
}

function useDiffersFromReleased(key: string, released: number | null, own: number | null, doc: FormDoc) {
  const isOther = released !== null && released !== own
  const other = useQuery({ ...revisionOptions(key, released ?? 1), enabled: isOther }).data
  const theirs = useMemo(() => (other ? toForm(other.document) : null), [other])
  if (!isOther || theirs === null) return null
  return { released, fields: countDifferences(theirs, doc) }
}
