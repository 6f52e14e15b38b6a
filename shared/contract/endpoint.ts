import type * as z from 'zod'
import type { ErrorCode } from '../errors.ts'
import type { Role, Scope } from './primitives.ts'

/**
 * Who may call: `open` needs no sign-in; otherwise a person with one of `roles`, or a token with one of `scopes`.
 * An empty list shuts that kind of caller out. There is no default: a route without a policy does not compile.
 */
export type Access = 'open' | { roles: readonly Role[]; scopes: readonly Scope[] }

export const everyRole: readonly Role[] = ['administrator', 'engineer', 'operator', 'auditor']

type Fields = z.ZodObject | undefined

/** One operation of the HTTP interface: what OpenAPI, routes, browser and command line are all made from. */
export type Endpoint<
  Params extends Fields = Fields,
  Query extends Fields = Fields,
  Body extends z.ZodType | undefined = z.ZodType | undefined,
  Reply extends z.ZodType = z.ZodType,
> = {
  /** Unique; the operationId of OpenAPI. */
  id: string
  method: 'GET' | 'POST' | 'PUT' | 'PATCH' | 'DELETE'
  /** Below `/api/v1`, parameters as `:name`. */
  path: string
  summary: string
  access: Access
  params?: Params
  query?: Query
  body?: Body
  /** Body, if any, and reply are NDJSON: their schemas describe one line of them. */
  ndjson?: boolean
  /** Takes `Idempotency-Key`. */
  idempotent?: boolean
  /** Takes `If-Match`: the `etag` of what the caller saw. */
  conditional?: boolean
  reply: {
    status: 200 | 201 | 204
    schema: Reply
    mediaType?: 'application/json' | 'text/plain' | 'text/csv' | 'application/pdf'
  }
  /** Refusals of its own, beside those that every route can give. */
  refusals: readonly ErrorCode[]
}

/** Keeps the exact types of a description. */
export function endpoint<
  Params extends Fields = undefined,
  Query extends Fields = undefined,
  Body extends z.ZodType | undefined = undefined,
  Reply extends z.ZodType = z.ZodType,
>(description: Endpoint<Params, Query, Body, Reply>): Endpoint<Params, Query, Body, Reply> {
  return description
}

type PartOf<Name extends string, Schema> = Schema extends z.ZodType
  ? { [K in Name]: z.input<Schema> }
  : unknown

/** What a caller passes: `params`, `query`, `body` where the endpoint has them, the key of an idempotent one, the etag of a conditional one. */
export type InputOf<E> =
  E extends Endpoint<infer P, infer Q, infer B, z.ZodType>
    ? PartOf<'params', P> &
        PartOf<'query', Q> &
        PartOf<'body', B> & {
          idempotencyKey?: string
          ifMatch?: string
        }
    : never

/** What comes back. */
export type ReplyOf<E> =
  E extends Endpoint<Fields, Fields, z.ZodType | undefined, infer R> ? z.output<R> : never
