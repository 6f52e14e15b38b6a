import * as z from 'zod'
import { limits } from '../limits.ts'
import { endpoint, everyRole } from './endpoint.ts'
import { designKey, instant, plainText, role, scope } from './primitives.ts'

/** Who is asking, and which server answers. `serverTime` lets a station see how far its clock is off. */
const server = z.object({ version: z.string(), solver: z.string(), ledger: z.string(), serverTime: instant })
const person = z.object({
  kind: z.literal('person'),
  id: z.string(),
  name: z.string(),
  email: z.string(),
  role,
})
const token = z.object({
  kind: z.literal('token'),
  id: z.string(),
  name: z.string(),
  station: z.string().nullable(),
  scopes: z.array(scope),
  designs: z.array(designKey).nullable(),
  expiresAt: instant,
})
export const me = z.object({ who: z.discriminatedUnion('kind', [person, token]), server }).meta({ id: 'Me' })
export type Me = z.output<typeof me>

/** A password is used exactly as typed: never trimmed, folded or cut (ASVS 6.2.8). */
const password = z.string().min(1).max(limits.passwordMax)
const email = z.string().min(3).max(limits.emailMax)

export const postSession = endpoint({
  id: 'signIn',
  method: 'POST',
  path: '/session',
  summary: 'Sign in with e-mail and password; the session is a cookie',
  access: 'open',
  body: z.strictObject({ email, password }),
  reply: { status: 200, schema: me },
  refusals: ['wrong-password', 'cross-site-refused'],
})

export const deleteSession = endpoint({
  id: 'signOut',
  method: 'DELETE',
  path: '/session',
  summary: 'Sign out; the session ends at the server',
  access: 'open',
  reply: { status: 204, schema: z.null() },
  refusals: ['cross-site-refused'],
})

export const getMe = endpoint({
  id: 'whoAmI',
  method: 'GET',
  path: '/me',
  summary: 'Who is asking, and which server answers',
  access: {
    roles: everyRole,
    scopes: ['designs:read', 'designs:write', 'trims:write', 'trims:read', 'trims:read-all', 'ledger:read'],
  },
  reply: { status: 200, schema: me },
  refusals: [],
})

/** A fresh installation has no people. The server prints a one-time secret with which the first administrator signs up. */
export const getSetup = endpoint({
  id: 'readSetup',
  method: 'GET',
  path: '/setup',
  summary: 'Whether the first administrator is still missing',
  access: 'open',
  reply: { status: 200, schema: z.object({ open: z.boolean() }) },
  refusals: [],
})

export const postSetup = endpoint({
  id: 'setUp',
  method: 'POST',
  path: '/setup',
  summary: 'Create the first administrator with the one-time secret',
  access: 'open',
  body: z.strictObject({
    secret: z.string().min(1).max(128),
    name: plainText(limits.personNameMax),
    email: z.email().max(limits.emailMax),
    password,
  }),
  reply: { status: 201, schema: me },
  refusals: ['setup-closed', 'password-too-weak', 'cross-site-refused'],
})
