import { QueryClientProvider } from '@tanstack/react-query'
import { renderHook, waitFor } from '@testing-library/react'
import { type ReactNode, useState } from 'react'
import { expect, test, vi } from 'vitest'
import { chainFrom, follow, pageAt, rowsOf } from '../../src/features/record/page-chain.ts'
import { makeQueryClient } from '../../src/lib/query-client.ts'
import { usePages } from '../../src/screens/history/use-pages.ts'
import { recordLine } from '../support/web-fixtures.ts'
import { fakeServer, json } from '../support/web-server.ts'

const size = 50
const newest = 9_000

/** Pages of a history without an end, scrolled to whichever row. */
function scrolled() {
  const server = fakeServer()
  let top = newest
  server.on('GET /trims', ({ query }) => {
    const from = Number(query.get('after') ?? top)
    const items = Array.from({ length: size }, (_, i) => recordLine(from - i))
    return json({ items, next: String(from - size) })
  })
  vi.stubGlobal('fetch', server.fetch)
  const client = makeQueryClient()
  const wrapper = ({ children }: { children: ReactNode }) => (
    <QueryClientProvider client={client}>{children}</QueryClientProvider>
  )
  const hook = renderHook(
    ({ row }: { row: number }) => {
      const [chain, setChain] = useState(() => chainFrom([{ after: '', first: 0 }]))
      return { chain, pages: usePages({}, chain, setChain, [row], row === 0) }
    },
    { wrapper, initialProps: { row: 0 } },
  )
  return {
    hook,
    client,
    record: (n: number) => {
      top = n
    },
    /** Which record stands in the row, once it is there. */
    at: async (row: number) => {
      hook.rerender({ row })
      await waitFor(() => expect(hook.result.current.pages.record(row)).toBeDefined())
      return hook.result.current.pages.record(row)!.number - recordLine(0).number
    },
    asked: (after: string) =>
      server.sent('GET /trims').filter(({ query }) => query.get('after') === after).length,
  }
}

test('far pages are forgotten and read again when they come back into view; near ones are at hand', async () => {
  const { at, asked, client } = scrolled()
  for (let row = 0; row <= 60 * size; row += size) expect(await at(row)).toBe(newest - row)
  expect(client.getQueryCache().getAll().length).toBeLessThanOrEqual(21)
  expect(asked('8900')).toBe(1)
  expect(await at(100)).toBe(8_900)
  expect(asked('8900')).toBe(2)
  expect(await at(60 * size)).toBe(newest - 60 * size)
  expect(asked(String(newest - 60 * size))).toBe(1)
})

test('newer records move no row that is read further down, and come in at the top without a hole', async () => {
  const { at, record, client } = scrolled()
  await at(0)
  await at(size)
  record(newest + 7)
  expect(await at(60)).toBe(newest - 60)
  expect(await at(30)).toBe(newest - 30)
  await client.invalidateQueries()
  await at(0)
  await waitFor(async () => expect(await at(0)).toBe(newest + 7))
  expect(await at(size)).toBe(newest + 7 - size)
})

test('a chain follows what pages say: on, to the end, and anew from a page that leads elsewhere', () => {
  const items = Array.from({ length: 3 })
  let chain = follow(chainFrom([{ after: '', first: 0 }]), 0, { items, next: 'b' })
  chain = follow(chain, 1, { items, next: 'c' })
  expect(chain.starts).toEqual([
    { after: '', first: 0 },
    { after: 'b', first: 3 },
    { after: 'c', first: 6 },
  ])
  expect(rowsOf(chain)).toBe(6)
  expect([0, 2, 3, 5, 6, 99].map((row) => pageAt(chain, row))).toEqual([0, 0, 1, 1, 2, 2])
  expect(follow(chain, 1, { items, next: 'c' })).toBe(chain)
  const ended = follow(chain, 2, { items: [1], next: null })
  expect(ended.end).toBe(7)
  expect(follow(ended, 2, { items: [1], next: null })).toBe(ended)
  expect(follow(ended, 0, { items, next: 'x' })).toEqual({
    starts: [
      { after: '', first: 0 },
      { after: 'x', first: 3 },
    ],
    end: null,
  })
})
