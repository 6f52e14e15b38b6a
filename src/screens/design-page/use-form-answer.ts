import { useDeferredValue, useMemo, useState } from 'react'
import { isOgeeError } from '../../../shared/errors.ts'
import { fieldAt } from '../../features/design-form/field-at.ts'
import type { Said } from '../../features/design-form/form-context.ts'
import { type FormDoc, rangeField } from '../../features/design-form/form-doc.ts'
import { type Checked, checkDraft, type Reading, readFields } from '../../features/design-form/read-form.ts'
import { useArithmetic } from '../../features/design-form/use-arithmetic.ts'
import { type Answer, answerOf } from './answer.ts'

/** The answer while typing: recomputed on every key; the last good one stays while a field is in error. */
export function useFormAnswer(doc: FormDoc, wantedRange: string | null) {
  const arithmetic = useArithmetic()
  const reading = useMemo(() => readFields(doc, arithmetic), [doc, arithmetic])
  const checked = useChecked(doc, reading)
  const isGood = reading.draft !== null && (checked === null || checked.document !== null)
  const draft = isGood ? reading.draft : null
  const range = draft?.ranges.find(({ id }) => id === wantedRange)?.id ?? draft?.ranges[0]?.id
  const now = useMemo(() => (draft && range !== undefined ? answerOf(draft, range) : null), [draft, range])
  const answer = now === null || isOgeeError(now) ? null : now
  const last = useLastGood(answer)
  const isFresh = last === null
  const said = useMemo((): Said => {
    const problems = new Map([...reading.problems, ...(checked?.problems ?? [])])
    if (isFresh) untouched(doc, problems)
    if (isOgeeError(now)) {
      for (const { path, message } of now.errors) problems.set(fieldAt(doc, path), message)
    }
    const remarks = new Map<string, string>()
    for (const { path, message } of answer?.size.remarks ?? []) remarks.set(fieldAt(doc, path), message)
    return { problems, remarks }
  }, [reading, checked, now, answer, doc, isFresh])
  return {
    /** Null for a moment after a key too, until it is checked. */
    document: checked?.document ?? null,
    isGood: draft !== null,
    said,
    isPending: reading.isPending,
    /** What is shown: greyed when it is not of what stands in the form. */
    answer: last?.answer ?? null,
    answeredAt: last?.at ?? null,
    isStale: answer === null && last !== null,
    refusal: isOgeeError(now) ? now : null,
  }
}

/** The check against the contract follows a key and gives way to the next; null while it has not been made. */
function useChecked(doc: FormDoc, reading: Reading): Checked | null {
  const asked = useMemo(() => ({ doc, draft: reading.draft }), [doc, reading])
  const later = useDeferredValue(asked)
  const checked = useMemo(() => (later.draft ? checkDraft(later.doc, later.draft) : null), [later])
  return later.draft === reading.draft ? checked : null
}

/** An empty draft is no error: one sentence says what to enter, and not each field too. */
function untouched({ values, ranges }: FormDoc, problems: Map<string, string>): void {
  if ((values.bits ?? '') === '') problems.delete('bits')
  for (const { id, ends } of ranges) if (ends === '') problems.delete(rangeField(id, 'ends'))
}

type Good = { answer: Answer; at: Date }

function useLastGood(answer: Answer | null): Good | null {
  const [last, setLast] = useState<Good | null>(null)
  if (answer === null || last?.answer === answer) return last
  const good = { answer, at: new Date() }
  setLast(good)
  return good
}
