import { type QueryClient, queryOptions, useMutation, useQueryClient } from '@tanstack/react-query'
import {
  deleteSession,
  getMe,
  getSetup,
  type Me,
  postSession,
  postSetup,
} from '../../../shared/contract/session.ts'
import { api } from '../../lib/api.ts'
import { setConnection } from '../../lib/connection.ts'
import { leave } from '../../lib/leave.ts'
import { paths } from '../../lib/paths.ts'

export const meOptions = queryOptions({
  queryKey: ['me'],
  queryFn: ({ signal }) => api(getMe, {}, signal),
  staleTime: 5 * 60_000,
})

export const setupOptions = queryOptions({
  queryKey: ['setup'],
  queryFn: ({ signal }) => api(getSetup, {}, signal),
})

/** The page that is open keeps its place; what another person had read is thrown away. */
function enter(client: QueryClient, me: Me): void {
  const before = client.getQueryData(meOptions.queryKey)
  client.setQueryData(meOptions.queryKey, me)
  setConnection({ sessionEnded: false })
  const others = { predicate: ({ queryKey }: { queryKey: readonly unknown[] }) => queryKey[0] !== 'me' }
  if (before && before.who.id !== me.who.id) void client.resetQueries(others)
  else void client.invalidateQueries(others)
}

export function useSignIn() {
  const client = useQueryClient()
  return useMutation({
    mutationFn: (body: { email: string; password: string }) => api(postSession, { body }),
    onSuccess: (me) => enter(client, me),
  })
}

export function useSignOut() {
  const client = useQueryClient()
  return useMutation({
    mutationFn: () => api(deleteSession, {}),
    onSuccess: () => {
      client.clear()
      leave.to(paths.signIn)
    },
  })
}

export function useSetUp() {
  const client = useQueryClient()
  return useMutation({
    mutationFn: (body: { secret: string; name: string; email: string; password: string }) =>
      api(postSetup, { body }),
    onSuccess: (me) => enter(client, me),
  })
}
