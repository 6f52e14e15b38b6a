import request, { type Test } from 'supertest'
import { expect } from 'vitest'
import { testPassword } from './server-harness.ts'

type Method = 'get' | 'post' | 'put' | 'patch' | 'delete'
export type As = { token?: string; cookie?: string; key?: string; headers?: Record<string, string> }

let keys = 0
/** A fresh idempotency key. */
export const newKey = () => `key-${++keys}-${Date.now()}`

/** A request under /api/v1 as a browser of ours or a script would send it. */
export function api(url: string, method: Method, path: string, as: As = {}): Test {
  const sent = request(url)[method](`/api/v1${path}`)
  if (as.token) sent.set('Authorization', `Bearer ${as.token}`)
  if (as.cookie) sent.set('Cookie', as.cookie)
  if (!as.token) sent.set('x-ogee', '1').set('Sec-Fetch-Site', 'same-origin')
  if (as.key) sent.set('Idempotency-Key', as.key)
  for (const [name, value] of Object.entries(as.headers ?? {})) sent.set(name, value)
  return sent
}

/** Signs in and gives the cookie to send. */
export async function signIn(url: string, email: string, password = testPassword): Promise<string> {
  const reply = await api(url, 'post', '/session').send({ email, password })
  expect(reply.status).toBe(200)
  return cookieOf(reply.headers['set-cookie'])
}

export function cookieOf(header: unknown): string {
  const [first] = header as string[]
  return first!.split(';')[0]!
}

/** Records one request and gives the record. */
export async function post(url: string, as: As, body: object, status = 201) {
  const reply = await api(url, 'post', '/trims', { key: newKey(), ...as }).send(body)
  expect(reply.body, JSON.stringify(reply.body).slice(0, 600)).toEqual(expect.any(Object))
  expect(reply.status, JSON.stringify(reply.body).slice(0, 600)).toBe(status)
  return reply.body
}
