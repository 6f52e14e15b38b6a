import { both, type FormDoc, type Line, type RangeTexts } from './form-doc.ts'

/** What differs between two forms, as an address carries it after `#`: never sent to a server. */
export type WhatIf = {
  values?: Readonly<Record<string, string>>
  gain?: readonly Line[]
  offset?: readonly Line[]
  ranges?: readonly RangeTexts[]
}
const prefix = '#try='
const longest = 200_000

export function differenceOf(from: FormDoc, to: FormDoc): WhatIf {
  const values: Record<string, string> = {}
  for (const [name, text] of Object.entries(to.values)) {
    if ((from.values[name] ?? '') !== text) values[name] = text
  }
  const change: WhatIf = Object.keys(values).length > 0 ? { values } : {}
  for (const which of both) {
    if (!sameRows(from.lines[which], to.lines[which])) change[which] = to.lines[which]
  }
  if (!sameRows(from.ranges, to.ranges)) change.ranges = to.ranges
  return change
}

const sameRows = (a: readonly object[], b: readonly object[]) =>
  a === b || (a.length === b.length && JSON.stringify(a) === JSON.stringify(b))

export function withWhatIf(doc: FormDoc, change: WhatIf): FormDoc {
  const lines = { gain: change.gain ?? doc.lines.gain, offset: change.offset ?? doc.lines.offset }
  const ranges = change.ranges ?? doc.ranges
  const ids = [...lines.gain, ...lines.offset, ...ranges].map(({ id }) => id)
  const nextId = Math.max(doc.nextId, ...ids.map((id) => id + 1))
  return { values: { ...doc.values, ...change.values }, lines, ranges, nextId }
}

/** Base64url of the JSON in UTF-8; empty when nothing differs. */
export function hashOf(change: WhatIf): string {
  if (Object.keys(change).length === 0) return ''
  const bytes = new TextEncoder().encode(JSON.stringify(change))
  let text = ''
  for (const byte of bytes) text += String.fromCharCode(byte)
  return prefix + btoa(text).replaceAll('+', '-').replaceAll('/', '_').replace(/=+$/, '')
}

/** What an address carries; null when it carries nothing, or nothing that can be read. */
export function whatIfOf(hash: string): WhatIf | null {
  if (!hash.startsWith(prefix) || hash.length > longest) return null
  try {
    const text = atob(hash.slice(prefix.length).replaceAll('-', '+').replaceAll('_', '/'))
    const bytes = Uint8Array.from(text, (char) => char.charCodeAt(0))
    return checked(JSON.parse(new TextDecoder('utf-8', { fatal: true }).decode(bytes)))
  } catch {
    return null
  }
}

const isObject = (value: unknown): value is Readonly<Record<string, unknown>> =>
  typeof value === 'object' && value !== null && !Array.isArray(value)

/** Everything in it must be a text where a text belongs: an address is typed by anybody. */
function checked(value: unknown): WhatIf | null {
  if (!isObject(value)) return null
  const change: WhatIf = {}
  if (value.values !== undefined) {
    if (!isObject(value.values) || !Object.values(value.values).every((one) => typeof one === 'string')) {
      return null
    }
    change.values = value.values as Record<string, string>
  }
  for (const name of ['gain', 'offset', 'ranges'] as const) {
    const rows = value[name]
    if (rows === undefined) continue
    const names = name === 'ranges' ? rangeNames : lineNames
    if (!Array.isArray(rows) || !rows.every((row) => isRow(row, names))) return null
    Object.assign(change, { [name]: rows })
  }
  return change
}

const lineNames = ['name', 'limit', 'shape', 'when', 'nominal', 'pivot']
const rangeNames = ['name', 'label', 'ends', 'offsetAt', 'sharedWith']

function isRow(row: unknown, names: readonly string[]): boolean {
  if (!isObject(row) || !Number.isSafeInteger(row.id)) return false
  return names.every((name) => typeof row[name] === 'string')
}
