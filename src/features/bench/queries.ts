import { queryOptions } from '@tanstack/react-query'
import type { CodesDocument } from '../../../shared/contract/codes.ts'
import { getDesign, getRevision, listDesigns } from '../../../shared/contract/designs.ts'
import type { Record } from '../../../shared/contract/record.ts'
import { getTrim } from '../../../shared/contract/trims.ts'
import { findUnits } from '../../../shared/contract/units.ts'
import { isOgeeError } from '../../../shared/errors.ts'
import { limits } from '../../../shared/limits.ts'
import { api } from '../../lib/api.ts'

export const designsOptions = queryOptions({
  queryKey: ['designs', 'all'],
  queryFn: ({ signal }) => api(listDesigns, { query: { limit: limits.pageMax } }, signal),
})

export const designOptions = (key: string) =>
  queryOptions({
    queryKey: ['design', key],
    queryFn: ({ signal }) => api(getDesign, { params: { key } }, signal),
  })

/** A released revision never changes, so it is read once. */
export const revisionOptions = (key: string, number: number | 'released') =>
  queryOptions({
    queryKey: ['revision', key, number],
    queryFn: ({ signal }) => api(getRevision, { params: { key, number } }, signal),
    staleTime: number === 'released' ? 30_000 : 60 * 60_000,
  })

export const unitOptions = (design: string, serial: string) =>
  queryOptions({
    queryKey: ['unit', design, serial],
    queryFn: async ({ signal }) => {
      const { items } = await api(findUnits, { query: { design, serial } }, signal).catch(
        (error: unknown) => {
          if (isOgeeError(error, 'not-found')) return { items: [] }
          throw error
        },
      )
      return items.find((unit) => unit.design === design && unit.serial === serial) ?? null
    },
    staleTime: 5_000,
  })

export const recordOptions = (id: string) =>
  queryOptions({
    queryKey: ['record', id],
    queryFn: ({ signal }) => api(getTrim, { params: { id } }, signal),
  })

/** The place in the ledger follows within a second or so; asked for until it is there. */
export const placedRecordOptions = (id: string) =>
  queryOptions({
    ...recordOptions(id),
    refetchInterval: (query) => (query.state.data?.ledger ? false : 1000),
  })

export type TrimRecord = Record & { result: CodesDocument }
const chainMost = 20

/** A record that is followed, and the trims that it stands on, oldest first. Overrides and verifications are passed over. */
export type Chain = { followed: Record | null; trims: readonly TrimRecord[] }

export const chainOptions = (id: string) =>
  queryOptions({
    queryKey: ['chain', id],
    queryFn: async ({ signal }): Promise<Chain> => {
      const chain: TrimRecord[] = []
      let followed: Record | null = null
      let next: string | null = id
      for (let i = 0; next !== null && i < chainMost; i++) {
        const record: Record = await api(getTrim, { params: { id: next } }, signal)
        followed ??= record
        if (isTrim(record)) chain.unshift(record)
        next = record.follows
      }
      return { followed, trims: chain }
    },
    staleTime: 60_000,
  })

function isTrim(record: Record): record is TrimRecord {
  return record.kind === 'trim' && record.result?.format === 'ogee.codes/1'
}
