import { infiniteQueryOptions, queryOptions } from '@tanstack/react-query'
import { getDesign, getRevision, listDesigns } from '../../../shared/contract/designs.ts'
import { getDifference, getUse } from '../../../shared/contract/revisions.ts'
import { api } from '../../lib/api.ts'

export const designsOptions = infiniteQueryOptions({
  queryKey: ['designs', 'list'],
  queryFn: ({ pageParam, signal }) =>
    api(listDesigns, { query: pageParam ? { after: pageParam } : {} }, signal),
  initialPageParam: '',
  getNextPageParam: (page) => page.next ?? undefined,
})

export const designOptions = (key: string) =>
  queryOptions({
    queryKey: ['designs', 'one', key],
    queryFn: ({ signal }) => api(getDesign, { params: { key } }, signal),
  })

export const revisionOptions = (key: string, number: number | 'released') =>
  queryOptions({
    queryKey: ['designs', 'one', key, 'revision', number],
    queryFn: ({ signal }) => api(getRevision, { params: { key, number } }, signal),
  })

/** What uses each revision: lots, and units that carry its codes. */
export const usageOptions = (key: string) =>
  queryOptions({
    queryKey: ['designs', 'one', key, 'use'],
    queryFn: ({ signal }) => api(getUse, { params: { key } }, signal),
  })

export const differenceOptions = (key: string, from: number, to: number) =>
  queryOptions({
    queryKey: ['designs', 'one', key, 'difference', from, to],
    queryFn: ({ signal }) => api(getDifference, { params: { key, number: from }, query: { to } }, signal),
  })
