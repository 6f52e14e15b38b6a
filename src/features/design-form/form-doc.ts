/** A design document as it stands in the form: the typed texts, not the numbers. An empty text is "not stated". */

export type Which = 'gain' | 'offset'
export const both = ['gain', 'offset'] as const satisfies readonly Which[]

export type LineField = 'name' | 'limit' | 'shape' | 'when' | 'nominal' | 'pivot'
/** `shape` is the distribution, with its k where it is normal: "normal 2"; `k` is a field of its own that writes there. */
export type Line = { readonly id: number } & Readonly<Record<LineField, string>>

export type RangeField = 'name' | 'label' | 'ends' | 'offsetAt' | 'sharedWith'
/** What an adjuster does in this range alone stands in `values`, under `rangeEffect`, as the adjuster's own does. */
export type RangeTexts = { readonly id: number } & Readonly<Record<RangeField, string>>

export type FormDoc = {
  readonly values: Readonly<Record<string, string>>
  readonly lines: Readonly<Record<Which, readonly Line[]>>
  readonly ranges: readonly RangeTexts[]
  /** The id of the next line or range: never given twice, so that undo meets the same ones. */
  readonly nextId: number
}

/** Names of fields: `bits`, `gain.slope`, `line.gain.4.limit`, `range.1.ends`, `range.1.gain.slope`. */
export const lineField = (which: Which, id: number, name: LineField | 'k') => `line.${which}.${id}.${name}`
export const rangeField = (id: number, name: RangeField) => `range.${id}.${name}`
export const rangeEffect = (id: number, which: Which) => `range.${id}.${which}`

const linePlace = /^line\.(gain|offset)\.(\d+)\.(\w+)$/
const rangePlace = /^range\.(\d+)\.(\w+)$/

/** The k of a normal shape as it is typed; undefined where the shape has none. */
export const kOf = (shape: string): string | undefined => /^normal (.*)$/s.exec(shape)?.[1]

/** The fields that a key in one changes: a k is part of its line's shape. */
export function fieldsWith(field: string): string[] {
  const line = /^(line\.\w+\.\d+)\.(?:k|shape)$/.exec(field)
  return line ? [`${line[1]}.k`, `${line[1]}.shape`] : [field]
}

/** The text of a field, empty where there is none. */
export function textOf(doc: FormDoc, field: string): string {
  const line = linePlace.exec(field)
  if (line) {
    const found = doc.lines[line[1] as Which].find(({ id }) => id === Number(line[2]))
    return line[3] === 'k' ? (kOf(found?.shape ?? '') ?? '') : (found?.[line[3] as LineField] ?? '')
  }
  const range = rangePlace.exec(field)
  if (range) return doc.ranges.find(({ id }) => id === Number(range[1]))?.[range[2] as RangeField] ?? ''
  return doc.values[field] ?? ''
}

/** The document with another text in one field; the same object when nothing changes. */
export function withText(doc: FormDoc, field: string, text: string): FormDoc {
  if (textOf(doc, field) === text) return doc
  const line = linePlace.exec(field)
  if (line) {
    const which = line[1] as Which
    const id = Number(line[2])
    const change = line[3] === 'k' ? { shape: `normal ${text}` } : { [line[3]!]: text }
    const lines = doc.lines[which].map((one) => (one.id === id ? { ...one, ...change } : one))
    return { ...doc, lines: { ...doc.lines, [which]: lines } }
  }
  const range = rangePlace.exec(field)
  if (range) {
    const id = Number(range[1])
    return {
      ...doc,
      ranges: doc.ranges.map((one) => (one.id === id ? { ...one, [range[2]!]: text } : one)),
    }
  }
  return { ...doc, values: { ...doc.values, [field]: text } }
}

export const withTexts = (doc: FormDoc, texts: Readonly<Record<string, string>>): FormDoc =>
  Object.entries(texts).reduce((now, [field, text]) => withText(now, field, text), doc)

/** How many fields of two documents differ; a line that only one has counts as one. */
export function countDifferences(a: FormDoc, b: FormDoc): number {
  if (a === b) return 0
  const names = new Set([...Object.keys(a.values), ...Object.keys(b.values)])
  let count = 0
  for (const name of names) if ((a.values[name] ?? '') !== (b.values[name] ?? '')) count++
  for (const which of both) count += rowsDiffer(a.lines[which], b.lines[which])
  return count + rowsDiffer(a.ranges, b.ranges)
}

type Row = Readonly<Record<string, string | number>>
function rowsDiffer(a: readonly Row[], b: readonly Row[]): number {
  if (a === b) return 0
  let count = Math.abs(a.length - b.length)
  for (let i = 0; i < Math.min(a.length, b.length); i++) {
    const [one, other] = [a[i]!, b[i]!]
    if (one === other) continue
    for (const name of Object.keys(one)) if (name !== 'id' && one[name] !== other[name]) count++
  }
  return count
}
