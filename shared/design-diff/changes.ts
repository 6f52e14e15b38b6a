import type { Design } from '../contract/design.ts'
import type { DesignChange } from '../contract/revisions.ts'
import { fieldName, isLimit, valueText, withUnit } from './fields.ts'

type Fields = { readonly [key: string]: unknown }
/** One place in both documents: where it stands in each, and how people call it. */
type Place = { key: string; before: string; after: string; words: readonly string[] }

/** A part that a design may leave out counts as empty, so that its fields are named one by one. */
const emptyParts: Fields = {
  budget: { gain: [], offset: [] },
  sizing: {},
  decision: {},
  instrument: {},
  effects: {},
}

/**
 * Every field in which two designs differ, in the order of the document.
 * Ranges are matched by id and budget lines by name, so that moving one is no change; defaults are compared as stated.
 * @param before @param after designs as the schema gives them, defaults filled in
 */
export function changesBetween(before: Design, after: Design): DesignChange[] {
  return compare(before, after, { key: '', before: '', after: '', words: [] })
}

function compare(before: unknown, after: unknown, place: Place): DesignChange[] {
  const empty = emptyParts[place.key]
  const a = before ?? (after === undefined ? undefined : empty)
  const b = after ?? (before === undefined ? undefined : empty)
  if (a === undefined && b === undefined) return []
  if (isList(a) && isList(b)) return compareLists(a, b, place)
  if (isPart(a) && isPart(b)) return compareParts(a, b, place)
  const [was, is] = [textOf(place.key, a), textOf(place.key, b)]
  return was === is ? [] : [changeOf(place, was, is)]
}

function compareParts(a: Fields, b: Fields, place: Place): DesignChange[] {
  const keys = [...new Set([...Object.keys(a), ...Object.keys(b)])]
  return keys.flatMap((key) => compare(a[key], b[key], within(place, key)))
}

function compareLists(a: readonly Fields[], b: readonly Fields[], place: Place): DesignChange[] {
  const older = byName(a)
  const newer = byName(b)
  const names = [...new Set([...newer.keys(), ...older.keys()])]
  return names.flatMap((name) => {
    const was = older.get(name)
    const is = newer.get(name)
    const title = String((is ?? was)?.part.id ?? (is ?? was)?.part.name)
    return compare(was?.part, is?.part, {
      key: '',
      before: `${place.before}/${was?.at}`,
      after: `${place.after}/${is?.at}`,
      words: [...place.words.slice(0, -1), ...listWords(place, title)],
    })
  })
}

const listWords = ({ key, words }: Place, title: string): string[] =>
  key === 'ranges' ? [`Range ${title}`] : [...words.slice(-1), title]

/** By what tells them apart; the second of a name is another line than the first. */
function byName(list: readonly Fields[]): Map<string, { part: Fields; at: number }> {
  const found = new Map<string, { part: Fields; at: number }>()
  const seen = new Map<string, number>()
  list.forEach((part, at) => {
    const name = JSON.stringify(part.id ?? part.name)
    const nth = (seen.get(name) ?? 0) + 1
    seen.set(name, nth)
    found.set(`${name} ${nth}`, { part, at })
  })
  return found
}

function within(place: Place, key: string): Place {
  const step = `/${key}`
  return {
    key,
    before: place.before + step,
    after: place.after + step,
    words: wordsWithin(place, key),
  }
}

function wordsWithin({ key: parent, words }: Place, key: string): readonly string[] {
  switch (parent) {
    case 'adjusters':
      return [`${capital(key)} adjuster`]
    case 'budget':
      return [`${capital(key)} budget`]
    case 'effects':
      return [...words, `own effect on ${key}`]
  }
  const isGroup = key === 'adjusters' || key === 'budget' || key === 'effects'
  if (isGroup) return words
  return words.length === 0 ? [capital(fieldName(key))] : [...words, fieldName(key)]
}

function changeOf(place: Place, before: string | null, after: string | null): DesignChange {
  const label = place.words.join(', ')
  const about = { label, before, after }
  if (before === null) {
    return { ...about, path: place.after, kind: 'added', sentence: `${label}: added, ${after}.` }
  }
  if (after === null) {
    return { ...about, path: place.before, kind: 'removed', sentence: `${label}: removed, was ${before}.` }
  }
  return { ...about, path: place.after, kind: 'changed', sentence: `${label}: from ${before} to ${after}.` }
}

function textOf(key: string, value: unknown): string | null {
  if (value === undefined) return null
  return isPart(value) ? summaryOf(value) : valueText(key, value)
}

/** A whole part in a few words: a range, an adjuster, a budget line, an effect. */
function summaryOf(part: Fields): string {
  if ('source' in part && isPart(part.source)) {
    return `${valueText('bits', part.source.bits)} bits, ${spanText(part.source)}`
  }
  if ('lowV' in part) return spanText(part)
  if ('distribution' in part) return lineText(part)
  return valueText('kind', part.kind)
}

const spanText = (part: Fields) => `${valueText('lowV', part.lowV)} to ${valueText('highV', part.highV)}`

function lineText(line: Fields): string {
  const limit = line.limitPpm === undefined ? withUnit(Number(line.limitV), 'V') : `${line.limitPpm} ppm`
  const k = line.k === undefined ? '' : `, k = ${line.k}`
  return `±${limit}, ${valueText('distribution', line.distribution)}${k}, ${valueText('when', line.when)}`
}

const capital = (text: string) => text.charAt(0).toUpperCase() + text.slice(1)

function isPart(value: unknown): value is Fields {
  return typeof value === 'object' && value !== null && !Array.isArray(value) && !isLimit(value)
}

function isList(value: unknown): value is readonly Fields[] {
  return Array.isArray(value) && value.every(isPart)
}
