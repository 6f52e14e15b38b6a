import { expect } from 'vitest'
import type { RevisionSummary } from '../../shared/contract/revisions.ts'
import { type As, api } from './server-client.ts'
import { unipolar } from './server-factories.ts'

/** Calls about revisions as a page or a script makes them; each gives status and body. */
export type Reply = {
  status: number
  body: Record<string, unknown> & { code?: string }
  etag: string | undefined
}
type Verb = 'get' | 'post' | 'put'

export function revisionCalls(url: string) {
  const send = async (verb: Verb, path: string, as: As, ifMatch: string | null, body?: object) => {
    const headers: Record<string, string> = ifMatch === null ? {} : { 'If-Match': ifMatch }
    const asked = api(url, verb, `/designs/${path}`, { ...as, headers })
    const { status, body: replied, headers: got } = await (body ? asked.send(body) : asked)
    return { status, body: replied, etag: got.etag } as Reply
  }
  const at = (key: string, number: number | string, rest = '') => `${key}/revisions/${number}${rest}`
  return {
    send,
    read: (as: As, key: string, number: number | string) => send('get', at(key, number), as, null),
    start: (as: As, key: string, body: object) => send('post', `${key}/revisions`, as, null, body),
    save: (as: As, key: string, number: number, ifMatch: string | null, document: unknown) =>
      send('put', at(key, number), as, ifMatch, { document }),
    submit: (as: As, key: string, number: number, ifMatch: string | null = '*') =>
      send('post', at(key, number, '/review'), as, ifMatch),
    giveBack: (as: As, key: string, number: number, ifMatch: string | null = '*', reason = goodReason) =>
      send('post', at(key, number, '/return'), as, ifMatch, { reason }),
    release: (as: As, key: string, number: number, ifMatch: string | null = '*') =>
      send('post', at(key, number, '/release'), as, ifMatch),
    withdraw: (as: As, key: string, number: number, ifMatch: string | null = '*', reason = goodReason) =>
      send('post', at(key, number, '/withdrawal'), as, ifMatch, { reason }),
  }
}
export type Calls = ReturnType<typeof revisionCalls>

export const goodReason = 'Said in more than ten characters'
export const titled = (title: string) => unipolar({ title })

/** Creates a design by the interface; its revision 1 is a draft of whoever asked. */
export async function createBy(url: string, as: As, key: string, document: unknown = unipolar()) {
  const reply = await api(url, 'post', '/designs', as).send({ key, document })
  expect(reply.status, JSON.stringify(reply.body).slice(0, 300)).toBe(201)
  return reply.body.revisions[0] as RevisionSummary
}
