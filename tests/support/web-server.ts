import type { Role } from '../../shared/contract/primitives.ts'
import { type ErrorCode, errorTable } from '../../shared/errors.ts'
import * as fixtures from './web-fixtures.ts'

/** A request as an answer of the fake server sees it. */
export type Asked = {
  method: string
  path: string
  query: URLSearchParams
  body: Record<string, unknown> | null
  headers: Headers
}
type Answer = (asked: Asked) => Response | Promise<Response>

export function json(value: unknown, status = 200): Response {
  return new Response(JSON.stringify(value), { status, headers: { 'content-type': 'application/json' } })
}

export function refusal(code: ErrorCode, detail: string, more: { retryAfter?: number } = {}): Response {
  const { status, title } = errorTable[code]
  const headers: Record<string, string> = { 'content-type': 'application/problem+json' }
  if (more.retryAfter !== undefined) headers['retry-after'] = String(more.retryAfter)
  return new Response(
    JSON.stringify({ type: `/problems/${code}`, title, status, detail, code, instance: 'request-1' }),
    { status, headers },
  )
}

const signInFirst = () => refusal('sign-in-required', 'Sign in first.')
const pageSize = 50
const total = 120

/**
 * A fetch that answers like the server would, from fixtures. `on` replaces an answer; `asked` keeps what was sent;
 * `role` null means that nobody is signed in.
 */
export function fakeServer(start: { role: Role | null } = { role: 'engineer' }) {
  const state = {
    role: start.role as Role | null,
    records: new Map<string, ReturnType<typeof fixtures.record>>(),
  }
  const asked: Asked[] = []
  const replaced = new Map<string, Answer>()

  const fetch = async (input: RequestInfo | URL, init: RequestInit = {}): Promise<Response> => {
    const url = new URL(String(input), 'http://ogee.test')
    const one: Asked = {
      method: init.method ?? 'GET',
      path: url.pathname.replace('/api/v1', ''),
      query: url.searchParams,
      body: typeof init.body === 'string' ? JSON.parse(init.body) : null,
      headers: new Headers(init.headers),
    }
    asked.push(one)
    for (const [route, answer] of [...replaced, ...answers(state)]) {
      if (matches(route, one)) return answer(one)
    }
    return refusal('not-found', `There is nothing at ${one.method} ${one.path}.`)
  }

  return {
    fetch,
    asked,
    state,
    /** `on('GET /trims/:id', …)`: the newest answer for a route wins. */
    on: (route: string, answer: Answer) => replaced.set(route, answer),
    off: (route: string) => replaced.delete(route),
    sent: (route: string) => asked.filter((one) => matches(route, one)),
  }
}
export type FakeServer = ReturnType<typeof fakeServer>

function matches(route: string, asked: Asked): boolean {
  const [method, path = ''] = route.split(' ')
  const pattern = new RegExp(`^${path.replaceAll(/:\w+/g, '[^/]+')}$`)
  return method === asked.method && pattern.test(asked.path)
}

type State = { role: Role | null; records: Map<string, ReturnType<typeof fixtures.record>> }

function answers(state: State): [string, Answer][] {
  const inside =
    (answer: Answer): Answer =>
    (asked) =>
      state.role === null ? signInFirst() : answer(asked)
  return [
    ['GET /me', inside(() => json(fixtures.me(state.role ?? 'engineer')))],
    ['GET /setup', () => json({ open: false })],
    ['DELETE /session', () => new Response(null, { status: 204 })],
    [
      'POST /session',
      () => {
        state.role ??= 'engineer'
        return json(fixtures.me(state.role))
      },
    ],
    ['GET /ledger/checkpoint', () => new Response(fixtures.checkpointText)],
    ['GET /ledger/key', () => new Response(fixtures.verifierKey)],
    ['GET /ledger/keys', () => json({ items: [fixtures.ledgerKey] })],
    ['GET /ledger/checkpoints', inside(() => json({ items: fixtures.checkpoints, next: '2' }))],
    ['GET /designs', inside(() => json({ items: [fixtures.designLine], next: null }))],
    ['GET /designs/DBS-A', inside(() => json(fixtures.designLine))],
    ['GET /designs/DBS-A/revisions/2', inside(() => json(fixtures.revision(2)))],
    ['GET /designs/DBS-A/revisions/:number', inside(() => json(fixtures.revision(1)))],
    ['GET /trims', inside(listRecords)],
    ['GET /findings', inside(() => json({ items: [], next: null }))],
    ['GET /history/count', inside(() => json({ count: total, more: false }))],
    ['GET /history/recorders', inside(() => json({ items: fixtures.recorders, next: null }))],
    ['GET /trims/:id', inside((asked) => oneRecord(state, asked))],
    ['GET /stations', inside(() => json({ items: fixtures.stations }))],
    ['GET /instruments', inside(() => json({ items: fixtures.instruments, overdueAllowed: false }))],
    ['GET /tokens', inside(() => json({ items: fixtures.tokens }))],
    ['POST /tokens', inside(() => json({ ...fixtures.tokens[0], token: fixtures.tokenText }, 201))],
    ['GET /lots', inside(() => json({ items: [], next: null }))],
    ['GET /units', inside(() => json({ items: [] }))],
  ]
}

/** Newest first, in keyset pages: the cursor is the number after which to go on. */
function listRecords({ query }: Asked): Response {
  const lines = Array.from({ length: total }, (_, i) => fixtures.recordLine(total - i)).filter(
    (line) =>
      (!query.has('unit') || line.unit === query.get('unit')) &&
      line.unit.startsWith(query.get('serial') ?? '') &&
      (!query.has('design') || line.design === query.get('design')) &&
      (!query.has('kind') || line.kind === query.get('kind')) &&
      (!query.has('verdict') || line.verdict === query.get('verdict')),
  )
  const after = query.get('after')
  const from = after === null ? 0 : lines.findIndex((line) => String(line.number) === after) + 1
  const items = lines.slice(from, from + pageSize)
  const last = items.at(-1)
  return json({ items, next: last && from + pageSize < lines.length ? String(last.number) : null })
}

function oneRecord(state: State, { path }: Asked): Response {
  const id = path.split('/')[2] ?? ''
  const kept = state.records.get(id)
  return kept ? json(kept) : refusal('not-found', 'There is nothing here, or it is not open to you.')
}
