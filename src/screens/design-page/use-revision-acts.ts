import { useQueryClient } from '@tanstack/react-query'
import { useState } from 'react'
import { useNavigate } from 'react-router-dom'
import type { Design } from '../../../shared/contract/design.ts'
import { postDesign } from '../../../shared/contract/designs.ts'
import {
  postRelease,
  postReturn,
  postReview,
  postRevision,
  postWithdrawal,
} from '../../../shared/contract/revisions.ts'
import { isOgeeError } from '../../../shared/errors.ts'
import { api } from '../../lib/api.ts'
import { paths } from '../../lib/paths.ts'
import { announce } from '../../ui/status.tsx'

/** What changes a revision's state. Each is one request; afterwards everything of this design is read again. */
export function useRevisionActs(key: string, number: number | null) {
  const client = useQueryClient()
  const navigate = useNavigate()
  const [error, setError] = useState<unknown>(null)
  const [isBusy, setBusy] = useState(false)
  const act = async (does: () => Promise<string | undefined>, said: string): Promise<boolean> => {
    setBusy(true)
    setError(null)
    try {
      const address = await does()
      await client.invalidateQueries({ queryKey: ['designs'] })
      announce(said)
      if (address !== undefined) await navigate(address)
      return true
    } catch (cause) {
      setError(cause)
      // Somebody else may have been quicker: what stands on the page is read again.
      if (isOgeeError(cause)) await client.invalidateQueries({ queryKey: ['designs', 'one', key] })
      return false
    } finally {
      setBusy(false)
    }
  }
  const params = { key, number: number ?? 0 }
  return {
    error,
    isBusy,
    clear: () => setError(null),
    submit: (etag: string) =>
      act(async () => {
        await api(postReview, { params, ifMatch: etag })
        return undefined
      }, `Revision ${number} is in review.`),
    giveBack: (etag: string, reason: string) =>
      act(async () => {
        await api(postReturn, { params, body: { reason }, ifMatch: etag })
        return undefined
      }, `Revision ${number} is a draft again.`),
    release: (etag: string) =>
      act(async () => {
        await api(postRelease, { params, ifMatch: etag })
        return undefined
      }, `Revision ${number} is released.`),
    withdraw: (etag: string, reason: string) =>
      act(async () => {
        await api(postWithdrawal, { params, body: { reason }, ifMatch: etag })
        return undefined
      }, `Revision ${number} is withdrawn.`),
    startFrom: (from: number) =>
      act(async () => {
        const next = await api(postRevision, { params: { key }, body: { from } })
        return paths.design(key, next.number)
      }, 'A new draft stands.'),
    startWith: (document: Design) =>
      act(async () => {
        const next = await api(postRevision, { params: { key }, body: { document } })
        return paths.design(key, next.number)
      }, 'What you typed is a draft of its own.'),
    copyTo: (newKey: string, document: Design) =>
      act(async () => {
        const from = { design: key, revision: params.number }
        await api(postDesign, { body: { key: newKey, document, copiedFrom: from } })
        return paths.design(newKey, 1)
      }, `Copied to ${newKey}.`),
  }
}
export type RevisionActs = ReturnType<typeof useRevisionActs>
