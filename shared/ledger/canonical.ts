import { OgeeError } from '../errors.ts'

/** What JSON can say. Undefined members of objects are left out, as JSON does. */
export type Json =
  | null
  | boolean
  | number
  | string
  | readonly Json[]
  | { readonly [key: string]: Json | undefined }

const encoder = new TextEncoder()
const loneSurrogate = /\p{Cs}/u

/**
 * The one text that a JSON value has under RFC 8785 (JSON Canonicalization Scheme): no spaces, members sorted by the
 * UTF-16 code units of their names, numbers as ECMAScript writes them (so -0 becomes 0), strings with the shortest escapes.
 *
 * @param value any JSON value; an undefined member counts as absent.
 * @returns the canonical text. Two values have the same text exactly when RFC 8785 calls them the same.
 * @throws `not-finite` for NaN and infinities, `invalid-document` for a lone surrogate or something that JSON cannot say.
 * Source: RFC 8785 (2020) sections 3.2.2 and 3.2.3. Numbers keep every bit of a double, except the sign of zero.
 * @example canonicalText({ b: 1.50, a: [true, 'é'] }) // '{"a":[true,"é"],"b":1.5}'
 */
export function canonicalText(value: Json): string {
  switch (typeof value) {
    case 'string':
      return quoted(value)
    case 'number':
      return number(value)
    case 'boolean':
      return value ? 'true' : 'false'
    case 'object':
      if (value === null) return 'null'
      if (Array.isArray(value)) return array(value)
      return object(value as { readonly [key: string]: Json | undefined })
    default:
      throw new OgeeError('invalid-document', `JSON cannot say ${typeof value}.`)
  }
}

/**
 * The canonical text as UTF-8 bytes: what is hashed, signed and stored.
 *
 * @param value any JSON value.
 * @returns UTF-8 bytes of `canonicalText(value)`.
 * @throws as `canonicalText`.
 * Source: RFC 8785 section 3.2.4.
 * @example canonicalBytes({}).length // 2
 */
export function canonicalBytes(value: Json): Uint8Array {
  return encoder.encode(canonicalText(value))
}

function array(values: readonly Json[]): string {
  let text = '['
  for (const value of values) {
    if (text.length > 1) text += ','
    text += canonicalText(value)
  }
  return `${text}]`
}

function object(value: { readonly [key: string]: Json | undefined }): string {
  const prototype: unknown = Object.getPrototypeOf(value)
  if (prototype !== Object.prototype && prototype !== null) {
    throw new OgeeError('invalid-document', 'Only plain objects have a canonical form.')
  }
  let text = '{'
  for (const key of sortedKeys(value)) {
    const member = value[key]
    if (member === undefined) continue
    if (text.length > 1) text += ','
    text += quotedName(key)
    text += canonicalText(member)
  }
  return `${text}}`
}

/** More than any document of ours has in one object. */
const fewKeys = 40

/**
 * By UTF-16 code units, as RFC 8785 section 3.2.3 asks for, which is how ECMAScript compares strings. Every record goes
 * through here, and for its few keys in nearly the right order inserting makes half the work and no garbage.
 */
function sortedKeys(value: object): string[] {
  const keys = Object.keys(value)
  if (keys.length > fewKeys) return keys.sort((a, b) => (a < b ? -1 : 1))
  for (let i = 1; i < keys.length; i++) {
    const key = keys[i]!
    let at = i
    for (; at > 0 && keys[at - 1]! > key; at--) keys[at] = keys[at - 1]!
    keys[at] = key
  }
  return keys
}

function number(value: number): string {
  if (!Number.isFinite(value)) throw new OgeeError('not-finite', `${value} has no place in a document.`)
  // String() is the ECMAScript algorithm that RFC 8785 section 3.2.2.3 refers to; it already writes -0 as 0.
  return String(value)
}

/** Names with their colon: few come again and again; kept up to a bound, in case somebody makes up new ones. */
const quotedNames = new Map<string, string>()

function quotedName(name: string): string {
  const known = quotedNames.get(name)
  if (known !== undefined) return known
  const made = `${quoted(name)}:`
  if (quotedNames.size < 1_000) quotedNames.set(name, made)
  return made
}

function quoted(text: string): string {
  // JSON.stringify would escape a lone surrogate and so give bytes to something that is not text.
  if (loneSurrogate.test(text)) {
    throw new OgeeError('invalid-document', 'The text holds half a character (a lone surrogate).')
  }
  return JSON.stringify(text)
}
