import { queryOptions, useMutation, useQueryClient } from '@tanstack/react-query'
import { useRef } from 'react'
import type { InputOf } from '../../../shared/contract/endpoint.ts'
import { listFindings, postAnswer, postClosing, postFinding } from '../../../shared/contract/findings.ts'
import { limits } from '../../../shared/limits.ts'
import { api } from '../../lib/api.ts'

export type About = { record: string } | { design: string; lot: string }

/** Findings on a record and on its lot; or on a lot and on its records. */
export const findingsOptions = (about: About) =>
  queryOptions({
    queryKey: ['findings', about],
    queryFn: ({ signal }) => api(listFindings, { query: { ...about, limit: limits.pageMax } }, signal),
  })

export type Subject = InputOf<typeof postFinding>['body']['subject']
/** What is written: a finding, an answer to one, or that one is closed. */
export type Writing = { act: 'find'; subject: Subject } | { act: 'answer' | 'close'; finding: string }

/**
 * Sends words that are kept for good. The key stays while the same words are tried again, so that a lost answer doubles
 * nothing.
 */
export function useWrite() {
  const client = useQueryClient()
  const attempt = useRef<{ words: string; key: string } | null>(null)
  return useMutation({
    mutationFn: ({ writing, text }: { writing: Writing; text: string }) => {
      const words = JSON.stringify([writing, text])
      if (attempt.current?.words !== words) attempt.current = { words, key: crypto.randomUUID() }
      const idempotencyKey = attempt.current.key
      if (writing.act === 'find') {
        return api(postFinding, { body: { subject: writing.subject, text }, idempotencyKey })
      }
      const endpoint = writing.act === 'answer' ? postAnswer : postClosing
      return api(endpoint, { params: { id: writing.finding }, body: { text }, idempotencyKey })
    },
    onSuccess: () =>
      Promise.all([
        client.invalidateQueries({ queryKey: ['findings'] }),
        client.invalidateQueries({ queryKey: ['records'] }),
      ]),
  })
}
