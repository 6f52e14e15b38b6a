import * as z from 'zod'
import { type ErrorCode, errorTable } from '../errors.ts'
import type { Endpoint } from './endpoint.ts'
import { problem } from './problem.ts'

/** OpenAPI 3.1 from the endpoint descriptions: the same schemas that check requests, so that it cannot be out of date. */

type JsonObject = { [key: string]: unknown }

export function openApiDocument(endpoints: readonly Endpoint[], version: string): JsonObject {
  const schemas: JsonObject = {}
  const paths: { [path: string]: JsonObject } = {}
  for (const endpoint of endpoints) {
    const path = endpoint.path.replaceAll(/:(\w+)/g, '{$1}')
    paths[path] ??= {}
    paths[path][endpoint.method.toLowerCase()] = operation(endpoint, schemas)
  }
  toSchema(problem, 'output', schemas)
  return {
    openapi: '3.1.0',
    info: {
      title: 'Ogee',
      version,
      description: 'Trims of precision converter channels: plan, record, show.',
    },
    servers: [{ url: '/api/v1' }],
    paths,
    components: { schemas, securitySchemes },
  }
}

const securitySchemes = {
  session: {
    type: 'apiKey',
    in: 'cookie',
    name: 'ogee',
    description:
      'Cookie of a signed-in person (`__Host-ogee` over TLS). Unsafe methods also need the header x-ogee: 1.',
  },
  token: { type: 'http', scheme: 'bearer', description: "A station's token." },
}

function operation(endpoint: Endpoint, schemas: JsonObject): JsonObject {
  return {
    operationId: endpoint.id,
    summary: endpoint.summary,
    ...(endpoint.access === 'open' ? { security: [] } : { security: securityOf(endpoint.access) }),
    parameters: parametersOf(endpoint, schemas),
    ...(endpoint.body
      ? {
          requestBody: {
            required: true,
            content: { [mediaTypeOf(endpoint)]: { schema: toSchema(endpoint.body, 'input', schemas) } },
          },
        }
      : {}),
    responses: { ...replyOf(endpoint, schemas), ...problemsOf(endpoint) },
  }
}

function securityOf({ roles, scopes }: Exclude<Endpoint['access'], 'open'>): JsonObject[] {
  return [...(roles.length > 0 ? [{ session: [] }] : []), ...(scopes.length > 0 ? [{ token: [] }] : [])]
}

function parametersOf(endpoint: Endpoint, schemas: JsonObject): JsonObject[] {
  const fields = (fields: z.ZodObject | undefined, where: 'path' | 'query'): JsonObject[] =>
    Object.entries(fields?.shape ?? {}).map(([name, field]) => {
      const schema = toSchema(field as z.ZodType, 'output', schemas)
      return {
        name,
        in: where,
        required: where === 'path' || !(field as z.ZodType).safeParse(undefined).success,
        // Several values stand in one parameter, with commas between.
        ...(schema.type === 'array' ? { style: 'form', explode: false } : {}),
        schema,
      }
    })
  const key = {
    name: 'Idempotency-Key',
    in: 'header',
    required: true,
    description: 'Chosen by the client; the same key and body again give the first answer.',
    schema: { type: 'string', minLength: 1, maxLength: 128, pattern: '^[\\x21-\\x7e]+$' },
  }
  const etag = {
    name: 'If-Match',
    in: 'header',
    required: true,
    description: 'The etag of what the caller saw; refused with 412 when it was changed since.',
    schema: { type: 'string', minLength: 1 },
  }
  return [
    ...fields(endpoint.params, 'path'),
    ...fields(endpoint.query, 'query'),
    ...(endpoint.idempotent ? [key] : []),
    ...(endpoint.conditional ? [etag] : []),
  ]
}

/** What an NDJSON schema describes is one line. */
const mediaTypeOf = ({ ndjson }: Endpoint) => (ndjson ? 'application/x-ndjson' : 'application/json')

function replyOf(endpoint: Endpoint, schemas: JsonObject): JsonObject {
  const { reply } = endpoint
  if (reply.status === 204) return { 204: { description: 'Done' } }
  const schema = toSchema(reply.schema, 'output', schemas)
  return {
    [reply.status]: {
      description: reply.status === 201 ? 'Created' : 'Done',
      content: { [reply.mediaType ?? mediaTypeOf(endpoint)]: { schema } },
    },
  }
}

/** What each route can answer beside its own refusals, by what it takes and who may call it. */
function problemsOf(endpoint: Endpoint): JsonObject {
  const unsafe = endpoint.method !== 'GET'
  const closed = endpoint.access !== 'open'
  const codes: ErrorCode[] = [
    ...endpoint.refusals,
    'bad-framing',
    'too-many-requests',
    'header-too-large',
    'database-unavailable',
    'defect',
    'method-not-allowed',
  ]
  if (closed)
    codes.push('sign-in-required', 'token-invalid', 'token-malformed', 'insufficient-scope', 'forbidden')
  // A write looks at whatever credentials come with it, also where none are needed.
  if (unsafe)
    codes.push('not-ready', 'cross-site-refused', 'token-invalid', 'token-malformed', 'insufficient-scope')
  if (endpoint.params || endpoint.query || endpoint.body) codes.push('invalid-request')
  if (endpoint.params) codes.push('not-found')
  if (endpoint.body) codes.push('malformed-json', 'unsupported-media-type', 'body-too-large')
  if (endpoint.conditional) codes.push('precondition-required', 'precondition-failed')
  const byStatus = new Map<number, Set<ErrorCode>>()
  for (const code of codes) {
    const { status } = errorTable[code]
    byStatus.set(status, (byStatus.get(status) ?? new Set()).add(code))
  }
  return Object.fromEntries(
    [...byStatus].sort(([a], [b]) => a - b).map(([status, of]) => [status, problemReply(of)]),
  )
}

function problemReply(codes: ReadonlySet<ErrorCode>): JsonObject {
  return {
    description: [...codes].join(', '),
    content: { 'application/problem+json': { schema: { $ref: '#/components/schemas/Problem' } } },
  }
}

/** A schema in JSON Schema 2020-12. What carries an id goes into the components, inputs apart from outputs. */
function toSchema(schema: z.ZodType, io: 'input' | 'output', schemas: JsonObject): JsonObject {
  const name = (id: string) => (io === 'input' ? `${id}Input` : id)
  const made = z.toJSONSchema(schema, {
    io,
    unrepresentable: 'any',
    // Output may gain keys (contract.md); only what is sent to us is closed.
    override: ({ jsonSchema }) => {
      if (io === 'output') delete jsonSchema.additionalProperties
    },
  }) as JsonObject
  const { $schema: _, $defs, id, ...rest } = made
  const renamed = (value: unknown): unknown =>
    JSON.parse(
      JSON.stringify(value).replaceAll(
        /"#\/\$defs\/([^"]+)"/g,
        (_, of: string) => `"#/components/schemas/${name(of)}"`,
      ),
    )
  for (const [of, definition] of Object.entries(($defs ?? {}) as JsonObject)) {
    const { id: __, ...plain } = definition as JsonObject
    schemas[name(of)] ??= renamed(plain)
  }
  if (typeof id !== 'string') return renamed(rest) as JsonObject
  schemas[name(id)] ??= renamed(rest)
  return { $ref: `#/components/schemas/${name(id)}` }
}
