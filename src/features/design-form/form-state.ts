import { type FormDoc, type Line, type RangeTexts, type Which, withText, withTexts } from './form-doc.ts'

/** The form with all its steps: undo goes back to the first. */
export type FormState = {
  readonly doc: FormDoc
  readonly past: readonly FormDoc[]
  readonly future: readonly FormDoc[]
  /** The field that is being typed in: its keys are one step. */
  readonly typing: string | null
  /** The document before something was tried; null when nothing is. What is tried is not saved. */
  readonly before: FormDoc | null
}

export type FormAction =
  | { do: 'set'; field: string; text: string }
  /** Several fields in one step: taken-over resistors. */
  | { do: 'set-all'; texts: Readonly<Record<string, string>> }
  | { do: 'leave' }
  | { do: 'add-line'; which: Which; after: number | null }
  | { do: 'move-line'; which: Which; id: number; by: -1 | 1 }
  | { do: 'remove-line'; which: Which; id: number }
  | { do: 'add-range' }
  | { do: 'remove-range'; id: number }
  /** Another document in one step: an import. */
  | { do: 'replace'; doc: FormDoc }
  | { do: 'undo' }
  | { do: 'redo' }
  /** Another document from outside: no step. */
  | { do: 'load'; doc: FormDoc }
  | { do: 'try'; doc: FormDoc }
  | { do: 'keep-tried' }
  | { do: 'drop-tried' }

export const startForm = (doc: FormDoc): FormState => ({
  doc,
  past: [],
  future: [],
  typing: null,
  before: null,
})

export function formReducer(state: FormState, action: FormAction): FormState {
  const { doc } = state
  switch (action.do) {
    case 'set':
      return typed(state, action.field, withText(doc, action.field, action.text))
    case 'set-all':
      return stepped(state, withTexts(doc, action.texts))
    case 'leave':
      return state.typing === null ? state : { ...state, typing: null }
    case 'add-line':
      return stepped(state, withLine(doc, action.which, action.after))
    case 'move-line':
      return stepped(state, withMoved(doc, action.which, action.id, action.by))
    case 'remove-line':
      return stepped(state, withLines(doc, action.which, without(doc.lines[action.which], action.id)))
    case 'add-range':
      return stepped(state, withRange(doc))
    case 'remove-range':
      return stepped(state, withoutRange(doc, action.id))
    case 'replace':
      return stepped(state, action.doc)
    case 'undo':
      return undone(state)
    case 'redo':
      return redone(state)
    case 'load':
      return startForm(action.doc)
    case 'try':
      return { ...stepped(state, action.doc), before: state.before ?? doc }
    case 'keep-tried':
      return { ...state, before: null }
    case 'drop-tried':
      return state.before === null ? state : { ...stepped(state, state.before), before: null }
  }
}

function stepped(state: FormState, doc: FormDoc): FormState {
  if (doc === state.doc) return state
  return { ...state, doc, past: [...state.past, state.doc], future: [], typing: null }
}

/** Keys in one field are one step until the field is left. */
function typed(state: FormState, field: string, doc: FormDoc): FormState {
  if (doc === state.doc) return state
  if (state.typing !== field) return { ...stepped(state, doc), typing: field }
  return { ...state, doc, future: [] }
}

function undone(state: FormState): FormState {
  const doc = state.past.at(-1)
  if (doc === undefined) return state
  const past = state.past.slice(0, -1)
  return { ...state, doc, past, future: [state.doc, ...state.future], typing: null }
}

function redone(state: FormState): FormState {
  const [doc, ...future] = state.future
  if (doc === undefined) return state
  return { ...state, doc, past: [...state.past, state.doc], future, typing: null }
}

function withLines(doc: FormDoc, which: Which, lines: readonly Line[]): FormDoc {
  return lines === doc.lines[which] ? doc : { ...doc, lines: { ...doc.lines, [which]: lines } }
}

function withLine(doc: FormDoc, which: Which, after: number | null): FormDoc {
  const lines = [...doc.lines[which]]
  const at = after === null ? lines.length : lines.findIndex(({ id }) => id === after) + 1
  lines.splice(at, 0, newLine(doc.nextId))
  return { ...withLines(doc, which, lines), nextId: doc.nextId + 1 }
}

export const newLine = (id: number): Line => ({
  id,
  name: '',
  limit: '',
  shape: 'rectangular',
  when: 'initial',
  nominal: '',
  pivot: '',
})

function withMoved(doc: FormDoc, which: Which, id: number, by: -1 | 1): FormDoc {
  const lines = [...doc.lines[which]]
  const from = lines.findIndex((line) => line.id === id)
  const to = from + by
  if (from < 0 || to < 0 || to >= lines.length) return doc
  lines.splice(to, 0, ...lines.splice(from, 1))
  return withLines(doc, which, lines)
}

function withRange(doc: FormDoc): FormDoc {
  const names = new Set(doc.ranges.map(({ name }) => name))
  let n = doc.ranges.length + 1
  while (names.has(`r${n}`)) n++
  return { ...doc, ranges: [...doc.ranges, newRange(doc.nextId, `r${n}`)], nextId: doc.nextId + 1 }
}

/** Its own effects go with it. */
function withoutRange(doc: FormDoc, id: number): FormDoc {
  const kept = Object.entries(doc.values).filter(([name]) => !name.startsWith(`range.${id}.`))
  return { ...doc, values: Object.fromEntries(kept), ranges: without(doc.ranges, id) }
}

export const newRange = (id: number, name: string): RangeTexts => ({
  id,
  name,
  label: '',
  ends: '',
  offsetAt: 'zero-volts',
  sharedWith: '',
})

const without = <T extends { id: number }>(list: readonly T[], id: number): readonly T[] =>
  list.some((one) => one.id === id) ? list.filter((one) => one.id !== id) : list
