import { queryOptions, useMutation, useQueryClient } from '@tanstack/react-query'
import type * as z from 'zod'
import { deleteToken, listTokens, postToken } from '../../../shared/contract/tokens.ts'
import { api } from '../../lib/api.ts'

export const tokensOptions = queryOptions({
  queryKey: ['tokens'],
  queryFn: ({ signal }) => api(listTokens, {}, signal),
})

export type TokenOrder = z.input<NonNullable<typeof postToken.body>>

/** The answer holds the token's text. It is kept in no cache: `gcTime` 0 forgets it with the dialog. */
export function useCreateToken() {
  const client = useQueryClient()
  return useMutation({
    mutationFn: (body: TokenOrder) => api(postToken, { body }),
    gcTime: 0,
    onSuccess: () => client.invalidateQueries({ queryKey: tokensOptions.queryKey }),
  })
}

export function useRevokeToken(id: string) {
  const client = useQueryClient()
  return useMutation({
    mutationFn: () => api(deleteToken, { params: { id } }),
    onSuccess: () => client.invalidateQueries({ queryKey: tokensOptions.queryKey }),
  })
}
