import { QueryClient } from '@tanstack/react-query'

/**
 * Refusals are final and outages are retried by the banner that counts down, so queries do not retry on their own.
 * `networkMode: always`: the server is often on this very machine, whatever the browser thinks of its network.
 */
export function makeQueryClient(): QueryClient {
  return new QueryClient({
    defaultOptions: {
      queries: { retry: false, staleTime: 30_000, networkMode: 'always', refetchOnWindowFocus: false },
      mutations: { retry: false, networkMode: 'always' },
    },
  })
}
