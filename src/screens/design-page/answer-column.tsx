import { Suspense, useCallback } from 'react'
import { fieldAt } from '../../features/design-form/field-at.ts'
import { withTexts } from '../../features/design-form/form-doc.ts'
import { Segmented } from '../../ui/segmented.tsx'
import { Steady } from '../../ui/steady.tsx'
import { utcText } from '../../ui/time-text.tsx'
import { WhenNear } from '../../ui/when-near.tsx'
import { LadderAndTables, Verdicts } from './answer-parts.tsx'
import type { Answered } from './live-answer.ts'
import { Lower } from './lower.tsx'
import { RevisionsPanel } from './on-demand.ts'
import type { DesignPageState } from './use-design-page.ts'
import { useAnswerNow } from './use-form-answer.ts'
import type { RevisionActs } from './use-revision-acts.ts'

type Texts = Readonly<Record<string, string>>
const greyed = '[&_*:not(label,label_*)]:!text-ink-3 [&_svg]:opacity-60'

/** The answer in the order of decision: verdicts, ladder with resolution × span, residual, resistors, yield; then revisions. */
export function AnswerColumn({
  page,
  acts,
  compared,
  onCompare,
}: {
  page: DesignPageState
  acts: RevisionActs
  compared: number | null
  onCompare: (number: number | null) => void
}) {
  // What is drawn follows the sentences of the verdict, and gives way to the next key.
  const { answer, isStale, refusal } = page.answered
  const { store } = page
  const onField = useCallback(
    (path: string) => {
      const field = fieldAt(store.get().doc, path)
      document.querySelector<HTMLElement>(`[data-field="${CSS.escape(field)}"]`)?.focus()
    },
    [store],
  )
  const onTry = useCallback(
    (texts: Texts) => store.dispatch({ do: 'try', doc: withTexts(store.get().doc, texts) }),
    [store],
  )
  const onUse = useCallback((texts: Texts) => store.dispatch({ do: 'set-all', texts }), [store])
  const grey = isStale ? greyed : ''
  return (
    <div className="contents wide:block wide:overflow-y-auto wide:pr-2 print:contents">
      <div className="sticky top-0 z-1 order-1 -mx-4 bg-paper px-4 pb-1.5 medium:mx-0 medium:px-0 wide:static print:static print:mx-0 print:px-0">
        <Ranges page={page} />
        <Now page={page} onField={onField} />
      </div>
      <div className={`follows order-2 min-w-0 wide:mt-3 ${grey}`}>
        <LadderAndTables
          answer={answer}
          problem={refusal?.code === 'adjusters-not-independent' ? refusal.message : undefined}
          onTry={onTry}
        />
      </div>
      <div className={`follows order-4 min-w-0 wide:mt-3.5 ${grey}`}>
        {answer ? (
          <Lower
            answer={answer}
            isReady={!isStale}
            onUse={page.isEditable ? onUse : undefined}
            onField={onField}
          />
        ) : null}
      </div>
      <div className="follows order-5 min-w-0 space-y-3.5 pb-6 wide:mt-3.5 print:hidden">
        {page.number === null ? null : (
          <WhenNear name="revisions" minHeight={160}>
            <Suspense fallback={null}>
              <RevisionsPanel page={page} acts={acts} compared={compared} onCompare={onCompare} />
            </Suspense>
          </WhenNear>
        )}
      </div>
    </div>
  )
}

/** The answer in words, with each key. */
function Now({ page, onField }: { page: DesignPageState; onField: (path: string) => void }) {
  const { box, answered } = useAnswerNow(page.live, page.range, page.answered)
  return (
    <Steady>
      <AnswerState answered={answered} />
      <div ref={box} className={answered.isStale ? greyed : ''}>
        {answered.answer ? <Verdicts answer={answered.answer} onField={onField} /> : null}
      </div>
    </Steady>
  )
}

function Ranges({ page }: { page: DesignPageState }) {
  const { answer } = page.answered
  if (!answer || answer.design.ranges.length < 2) return null
  return (
    <div className="mb-1.5">
      <Segmented
        label="Range of the answer"
        segments={answer.design.ranges.map(({ id, label }) => ({ value: id, label: label ?? id }))}
        value={answer.size.range}
        onChange={page.setRange}
      />
    </div>
  )
}

/** What the answer is of: nothing yet, or the last good values. */
function AnswerState({ answered }: { answered: Answered }) {
  const { answer, answeredAt, isStale, said, refusal } = answered
  const { values, ranges } = answered.of.doc
  if (answer === null && ((values.bits ?? '') === '' || (ranges[0]?.ends ?? '') === '')) {
    return (
      <p className="text-text">
        Enter the resolution and the range. The answer appears as soon as the two are there.
      </p>
    )
  }
  const why = [...said.problems.values()][0] ?? refusal?.message ?? ''
  if (answer === null) return <p className="text-text">{why}</p>
  if (!isStale) return null
  const at = answeredAt ? utcText(answeredAt.toISOString()).slice(11) : ''
  return <p role="status" className="text-text">{`Answer for the last good values, ${at} UTC. ${why}`}</p>
}
