import { type QueryClient, useQueryClient } from '@tanstack/react-query'
import { useCallback, useEffect, useRef, useState } from 'react'
import { type Design, designDocument } from '../../../shared/contract/design.ts'
import { postDesign, type Revision, type RevisionLine } from '../../../shared/contract/designs.ts'
import { putRevision } from '../../../shared/contract/revisions.ts'
import { isOgeeError } from '../../../shared/errors.ts'
import { designOptions, revisionOptions } from '../../features/design/queries.ts'
import { api } from '../../lib/api.ts'

export type Saved = { number: number; etag: string; at: string; text: string }
export type SaveState =
  | { is: 'saved' }
  | { is: 'saving' }
  /** Not taken: kept on this computer and tried again. */
  | { is: 'waiting'; why: string }
  /** Somebody saved it after it was opened here. */
  | { is: 'conflict'; theirs: Revision }

const pauseMs = 1200
const againMs = 5000

type Asked = {
  designKey: string
  revision: Revision | null
  /** The etag that what is in the form was typed over. */
  startEtag: string | null
  /** What is to be saved; null while it is in error, tried only, or not to be changed. */
  document: Design | null
}

/** Saves a draft after a pause in typing, one request at a time; a new design is created by its first good state. */
export function useServerDraft({ designKey, revision, startEtag, document }: Asked) {
  const client = useQueryClient()
  const [saved, setSaved] = useState<Saved | null>(() =>
    revision ? { ...savedOf(revision, revision.document), etag: startEtag ?? revision.etag } : null,
  )
  const [state, setState] = useState<SaveState>({ is: 'saved' })
  const latest = useRef({ saved, document, state })
  latest.current = { saved, document, state }
  const running = useRef<Promise<void> | null>(null)

  const saveOnce = useCallback(async (): Promise<void> => {
    const now = latest.current
    const { document: wanted } = now
    if (wanted === null || now.state.is === 'conflict') return
    if (now.saved?.text === JSON.stringify(wanted)) return setState({ is: 'saved' })
    setState({ is: 'saving' })
    try {
      const next = await put(client, designKey, now.saved, wanted)
      latest.current.saved = next
      setSaved(next)
      setState({ is: 'saved' })
    } catch (error) {
      setState(await refused(client, designKey, now.saved, error))
    }
  }, [client, designKey])

  /** Everything typed so far is at the server when this is through, or the state says why not. */
  const saveNow = useCallback(async (): Promise<Saved | null> => {
    await running.current
    running.current = saveOnce().finally(() => {
      running.current = null
    })
    await running.current
    const { saved: last, document: wanted } = latest.current
    return last !== null && last.text === JSON.stringify(wanted) ? last : null
  }, [saveOnce])

  useEffect(() => {
    if (document === null || state.is === 'conflict' || state.is === 'saving') return
    const wait = state.is === 'waiting' ? againMs : pauseMs
    const timer = setTimeout(() => void saveNow(), wait)
    return () => clearTimeout(timer)
  }, [document, state, saveNow])

  /** Their state becomes what this form was typed over: theirs is shown, or mine is saved over it. */
  const settle = useCallback((theirs: Revision) => {
    setSaved(savedOf(theirs, theirs.document))
    setState({ is: 'saved' })
  }, [])
  return { saved, state, saveNow, settle }
}

function savedOf(line: Pick<RevisionLine, 'number' | 'etag' | 'savedAt'>, document: Design): Saved {
  return { number: line.number, etag: line.etag, at: line.savedAt, text: textOf(document) }
}

/** In the order of keys that the form's own reading gives, so that the same is seen as the same. */
const textOf = (document: Design): string =>
  JSON.stringify(designDocument.safeParse(document).data ?? document)

async function put(client: QueryClient, key: string, saved: Saved | null, document: Design): Promise<Saved> {
  if (saved === null) {
    const line = await api(postDesign, { body: { key, document } })
    client.setQueryData(designOptions(key).queryKey, line)
    await client.invalidateQueries({ queryKey: ['designs', 'list'], refetchType: 'none' })
    return savedOf(line.revisions[0]!, document)
  }
  const { number, etag } = saved
  const summary = await api(putRevision, { params: { key, number }, body: { document }, ifMatch: etag })
  // The bytes are the server's to write: read again by whoever needs them.
  client.setQueryData(revisionOptions(key, number).queryKey, (old) =>
    old ? { ...old, ...summary, document } : old,
  )
  client.setQueryData(designOptions(key).queryKey, (old) =>
    old
      ? {
          ...old,
          revisions: old.revisions.map((one) => (one.number === number ? { ...one, ...summary } : one)),
        }
      : old,
  )
  return savedOf(summary, document)
}

async function refused(
  client: QueryClient,
  key: string,
  saved: Saved | null,
  error: unknown,
): Promise<SaveState> {
  const isConflict = isOgeeError(error, 'precondition-failed') || isOgeeError(error, 'revision-state')
  if (isConflict && saved !== null) {
    try {
      const options = { ...revisionOptions(key, saved.number), staleTime: 0 }
      return { is: 'conflict', theirs: await client.fetchQuery(options) }
    } catch {
      return { is: 'waiting', why: 'The server does not answer.' }
    }
  }
  return { is: 'waiting', why: isOgeeError(error) ? error.message : 'It could not be saved.' }
}
