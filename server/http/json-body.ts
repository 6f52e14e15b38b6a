import { isUtf8 } from 'node:buffer'
import express, { type Request, type RequestHandler } from 'express'
import { OgeeError } from '../../shared/errors.ts'
import { limits } from '../../shared/limits.ts'

/** Levels of nesting that any body of ours can have, with room to spare. */
const depthMax = 40
/** Bytes without which no key can reach a prototype and no text can hold half a character. */
const suspicious = ['\\u', '__proto__', 'constructor', 'prototype']

const json = { type: 'application/json', limit: limits.bodyMaxBytes } as const
const ndjson = { type: 'application/x-ndjson', limit: limits.batchMaxBytes } as const

/** Reads a JSON body: bounded in size and depth, UTF-8, no key that reaches a prototype, no half characters. */
export const jsonBody = bodyReader(json, parseJson)

/** Reads a block of NDJSON as bytes: bounded as a whole here, and line by line by whoever reads the lines. */
export const ndjsonBody = bodyReader(ndjson, (bytes) => bytes)

function bodyReader(kind: typeof json | typeof ndjson, read: (bytes: Buffer) => unknown): RequestHandler {
  const readBytes = express.raw({ ...kind, inflate: false })
  return (request, response, next) => {
    requireType(request, kind.type)
    void readBytes(request, response, (error?: unknown) => {
      if (error !== undefined) {
        next(error)
        return
      }
      try {
        request.body = read(request.body as Buffer)
        next()
      } catch (refusal) {
        next(refusal)
      }
    })
  }
}

function requireType(request: Request, type: string): void {
  const length = request.headers['content-length']
  if (request.headers['transfer-encoding'] === undefined && (length === undefined || length === '0')) {
    throw new OgeeError('malformed-json', 'The body is missing.')
  }
  const charset = /;\s*charset\s*=\s*"?([^";\s]+)/i.exec(request.headers['content-type'] ?? '')?.[1]
  if (!request.is(type) || (charset !== undefined && !/^utf-?8$/i.test(charset))) {
    throw new OgeeError('unsupported-media-type', `Send the body as ${type} in UTF-8.`)
  }
}

/** One JSON text of a body, with the bounds that hold for all of them. */
export function parseJson(bytes: Buffer): unknown {
  if (!isUtf8(bytes)) throw new OgeeError('malformed-json', 'The body is not UTF-8.')
  boundDepth(bytes)
  let value: unknown
  try {
    value = JSON.parse(bytes.toString('utf8'))
  } catch {
    throw new OgeeError('malformed-json', 'The body is not JSON.')
  }
  if (suspicious.some((text) => bytes.includes(text))) lookInto(value, '')
  return value
}

function boundDepth(bytes: Buffer): void {
  let depth = 0
  let inText = false
  for (let i = 0; i < bytes.length; i++) {
    const byte = bytes[i]
    if (inText) {
      if (byte === 0x5c) i++
      else if (byte === 0x22) inText = false
    } else if (byte === 0x22) inText = true
    else if (byte === 0x5b || byte === 0x7b) {
      if (++depth > depthMax) throw new OgeeError('malformed-json', `The body nests over ${depthMax} levels.`)
    } else if (byte === 0x5d || byte === 0x7d) depth--
  }
}

/** Depth is bounded by now, so that recursion is safe. */
function lookInto(value: unknown, at: string): void {
  if (typeof value === 'string') requireWholeCharacters(value, at)
  else if (Array.isArray(value)) for (const [i, entry] of value.entries()) lookInto(entry, `${at}/${i}`)
  else if (typeof value === 'object' && value !== null) {
    for (const [key, member] of Object.entries(value)) {
      requireWholeCharacters(key, at)
      if (key === '__proto__' || key === 'constructor' || key === 'prototype') {
        throw new OgeeError('invalid-request', `The key ${key} is not accepted anywhere.`, {
          errors: [{ path: `${at}/${key}`, message: 'This key is not accepted.' }],
        })
      }
      lookInto(member, `${at}/${key}`)
    }
  }
}

function requireWholeCharacters(text: string, at: string): void {
  if (!/\p{Cs}/u.test(text)) return
  throw new OgeeError('invalid-request', 'A text holds half a character (a lone surrogate).', {
    errors: [{ path: at, message: 'Half a character (a lone surrogate).' }],
  })
}
