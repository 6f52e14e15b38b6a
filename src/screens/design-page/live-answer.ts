import type { Design } from '../../../shared/contract/design.ts'
import { isOgeeError, type OgeeError } from '../../../shared/errors.ts'
import { createArithmetic } from '../../features/design-form/arithmetic.ts'
import { fieldAt } from '../../features/design-form/field-at.ts'
import type { Said } from '../../features/design-form/form-context.ts'
import { type FormDoc, rangeField } from '../../features/design-form/form-doc.ts'
import type { FormStore } from '../../features/design-form/form-store.ts'
import { readFields } from '../../features/design-form/read-form.ts'
import { type Answer, answerOf, type Measured } from './answer.ts'

/** What follows from the texts of the form for one range. */
export type Answered = {
  /** Of which texts. */
  of: View
  /** As read, not yet checked against the contract; null while anything is in error. */
  draft: Design | null
  said: Said
  isPending: boolean
  /** What is shown: the last good one, greyed while it is not of what stands in the form. */
  answer: Answer | null
  answeredAt: Date | null
  isStale: boolean
  refusal: OgeeError | null
}

/** The form at one moment. Another result of arithmetic is another moment too. */
export type View = { doc: FormDoc; before: FormDoc | null; measured: Measured | null }

/** The answer beside React, so that who shows it hears of a key first and everything else later. */
export type LiveAnswer = {
  view: () => View
  /** Units in the place of the budget's initial lines; null takes them away. They are no part of the document. */
  measure: (measured: Measured | null) => void
  answered: (view: View, range: string | null) => Answered
  subscribe: (hear: (isKey: boolean) => void) => () => void
}

export function createLiveAnswer(store: FormStore): LiveAnswer {
  const hearers = new Set<(isKey: boolean) => void>()
  const tell = (isKey: boolean) => {
    for (const hear of hearers) hear(isKey)
  }
  let view: View = { doc: store.get().doc, before: store.get().before, measured: null }
  let memory = new WeakMap<View, Map<string | null, Answered>>()
  let last: { answer: Answer; at: Date } | null = null
  const arithmetic = createArithmetic(() => {
    memory = new WeakMap()
    view = { ...view }
    tell(true)
  })
  store.subscribe((isKey) => {
    const { doc, before } = store.get()
    view = { ...view, doc, before }
    tell(isKey)
  })

  const answer = (of: View, wanted: string | null): Answered => {
    const { doc } = of
    const reading = readFields(doc, arithmetic())
    const { draft } = reading
    const range = draft?.ranges.find(({ id }) => id === wanted)?.id ?? draft?.ranges[0]?.id
    const now = draft && range !== undefined ? answerOf(draft, range, of.measured) : null
    const refusal = isOgeeError(now) ? now : null
    const good = now === null || isOgeeError(now) ? null : now
    if (good) last = { answer: good, at: new Date() }
    const problems = new Map(reading.problems)
    if (last === null) untouched(doc, problems)
    for (const { path, message } of refusal?.errors ?? []) problems.set(fieldAt(doc, path), message)
    const remarks = new Map<string, string>()
    for (const { path, message } of good?.size.remarks ?? []) remarks.set(fieldAt(doc, path), message)
    return {
      of,
      draft,
      said: { problems, remarks },
      isPending: reading.isPending,
      answer: last?.answer ?? null,
      answeredAt: last?.at ?? null,
      isStale: good === null && last !== null,
      refusal,
    }
  }
  return {
    view: () => view,
    measure: (measured) => {
      view = { ...view, measured }
      tell(false)
    },
    answered: (of, wanted) => {
      const known = memory.get(of) ?? new Map<string | null, Answered>()
      memory.set(of, known)
      const found = known.get(wanted) ?? answer(of, wanted)
      known.set(wanted, found)
      return found
    },
    subscribe: (hear) => {
      hearers.add(hear)
      return () => hearers.delete(hear)
    },
  }
}

/** An empty draft is no error: one sentence says what to enter, and not each field too. */
function untouched({ values, ranges }: FormDoc, problems: Map<string, string>): void {
  if ((values.bits ?? '') === '') problems.delete('bits')
  for (const { id, ends } of ranges) if (ends === '') problems.delete(rangeField(id, 'ends'))
}
