import { useMemo, useState } from 'react'
import { isOgeeError } from '../../../shared/errors.ts'
import { fieldAt } from '../../features/design-form/field-at.ts'
import type { Said } from '../../features/design-form/form-context.ts'
import type { FormDoc } from '../../features/design-form/form-doc.ts'
import { readForm } from '../../features/design-form/read-form.ts'
import { useArithmetic } from '../../features/design-form/use-arithmetic.ts'
import { type Answer, answerOf } from './answer.ts'

/** The answer while typing: recomputed on every key; the last good one stays while a field is in error. */
export function useFormAnswer(doc: FormDoc, wantedRange: string | null) {
  const arithmetic = useArithmetic()
  const reading = useMemo(() => readForm(doc, arithmetic), [doc, arithmetic])
  const { document } = reading
  const range = document?.ranges.find(({ id }) => id === wantedRange)?.id ?? document?.ranges[0]?.id
  const now = useMemo(
    () => (document && range !== undefined ? answerOf(document, range) : null),
    [document, range],
  )
  const answer = now === null || isOgeeError(now) ? null : now
  const said = useMemo((): Said => {
    const problems = new Map(reading.problems)
    if (isOgeeError(now)) {
      for (const { path, message } of now.errors) problems.set(fieldAt(doc, path), message)
    }
    const remarks = new Map<string, string>()
    for (const { path, message } of answer?.size.remarks ?? []) remarks.set(fieldAt(doc, path), message)
    return { problems, remarks }
  }, [reading, now, answer, doc])
  const last = useLastGood(answer)
  return {
    document,
    said,
    isPending: reading.isPending,
    /** What is shown: greyed when it is not of what stands in the form. */
    answer: last?.answer ?? null,
    answeredAt: last?.at ?? null,
    isStale: answer === null && last !== null,
    refusal: isOgeeError(now) ? now : null,
  }
}

type Good = { answer: Answer; at: Date }

function useLastGood(answer: Answer | null): Good | null {
  const [last, setLast] = useState<Good | null>(null)
  if (answer === null || last?.answer === answer) return last
  const good = { answer, at: new Date() }
  setLast(good)
  return good
}
