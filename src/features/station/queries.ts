import { queryOptions, useMutation, useQueryClient } from '@tanstack/react-query'
import { listStations, patchStation, postStation } from '../../../shared/contract/stations.ts'
import { api } from '../../lib/api.ts'

export const stationsOptions = queryOptions({
  queryKey: ['stations'],
  queryFn: ({ signal }) => api(listStations, {}, signal),
})

export function useCreateStation() {
  const client = useQueryClient()
  return useMutation({
    mutationFn: (name: string) => api(postStation, { body: { name } }),
    onSuccess: () => client.invalidateQueries({ queryKey: stationsOptions.queryKey }),
  })
}

/** Retiring ends the station's tokens, so they are read again too. */
export function useChangeStation(id: string) {
  const client = useQueryClient()
  return useMutation({
    mutationFn: (change: { name?: string; retired?: true }) =>
      api(patchStation, { params: { id }, body: change }),
    onSuccess: () =>
      Promise.all([
        client.invalidateQueries({ queryKey: stationsOptions.queryKey }),
        client.invalidateQueries({ queryKey: ['tokens'] }),
      ]),
  })
}
