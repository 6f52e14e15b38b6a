import type { VerifyResult } from '../../../shared/solver/types.ts'
import { noteSentences } from '../../features/bench/flag-sentences.ts'
import { ShortfallTable, SuspectPanel } from '../../features/bench/panels.tsx'
import { refusedAt } from '../../features/bench/use-recording.ts'
import {
  decisionSentences,
  effectSentences,
  outcomeSentence,
  passName,
  predictionSentence,
} from '../../features/bench/words.ts'
import { Button } from '../../ui/button.tsx'
import { KeyHint } from '../../ui/key-hint.tsx'
import { Section } from '../../ui/section.tsx'
import { Verdict } from '../../ui/verdict.tsx'
import { GridWithTools } from './grid-with-tools.tsx'
import { FitOfPage, Numbered, PasteHint } from './step-found.tsx'
import type { StepProps } from './step-props.ts'

/** Step 3: as left; or, before that, what falls short and what to do about a measurement in doubt. */
export function StepNext(props: StepProps) {
  const { page, bench } = props
  const { answer } = page
  const trim = answer.answer?.trim ?? null
  const isOpen = page.recording.recorded === null && !answer.isStale
  if (page.chain.length > 0) return <AsLeft {...props} />
  if (trim?.verdict === 'out-of-reach' && answer.answer && bench.trim) {
    return (
      <Section heavy title={<Numbered n={3}>What falls short</Numbered>}>
        <ShortfallTable
          fit={answer.answer.fit}
          trim={trim}
          trimmers={bench.trim.trimmers}
          range={bench.channel.range}
        />
      </Section>
    )
  }
  if (trim?.verdict === 'suspect' && isOpen) {
    return (
      <Section heavy title={<Numbered n={3}>Before going on</Numbered>}>
        <Doubt {...props} />
      </Section>
    )
  }
  return (
    <Section heavy title={<Numbered n={3}>As left</Numbered>}>
      <Prediction {...props} />
      <GoOn {...props} />
    </Section>
  )
}

function Doubt({ page, acts, search }: StepProps) {
  const { recording, answer, fields } = page
  if (!answer.answer) return null
  const blocked = page.shut ?? (search.unit === null || page.applied === null ? 'incomplete' : null)
  return (
    <SuspectPanel
      fit={answer.answer.fit}
      reason={fields.reason}
      onReason={(reason) => page.setField('reason', reason)}
      mayOverride={page.person.role === 'engineer'}
      isBusy={page.isFixed}
      blocked={blocked}
      error={refusedAt(recording.refusal, '/reason')}
      onOverride={() => acts.record(fields.reason.trim())}
      onRecordMarked={() => acts.record(null)}
    />
  )
}

function Prediction({ page, bench }: StepProps) {
  const trim = page.answer.answer?.trim
  if (!trim || !bench.trim || page.answer.isStale) return null
  const { range, targetV } = bench.channel
  const sentence = predictionSentence(trim, bench.trim.trimmers, range, targetV)
  if (!sentence) return null
  return (
    <div className="mb-2">
      <p className="text-text">
        <Verdict verdict={trim.verdict} /> {sentence}
      </p>
      {noteSentences(trim.notes).map((note) => (
        <p key={note} className="mt-0.5 text-body text-ink-2">
          {note}
        </p>
      ))}
    </div>
  )
}

/** What the hand does next. */
function GoOn({ page, acts }: StepProps) {
  const count = page.answer.answer?.fit.n ?? page.planned.length
  const { recorded } = page.recording
  if (recorded && acts.next) {
    return (
      <>
        <p className="mb-2 text-body">Load the codes, then measure the same codes again.</p>
        <Button onClick={acts.goNext}>
          {passName(acts.next.pass)}
          <KeyHint keys="p" />
        </Button>
      </>
    )
  }
  if (recorded) {
    return (
      <p className="text-body text-ink-2">
        Its codes are not accepted, so there is nothing to load. Measure again, or override the record with a
        reason.
      </p>
    )
  }
  return (
    <p className="text-body text-ink-2">
      After loading the codes, measure the same {words(count)} codes again.
    </p>
  )
}

const numerals = ['no', 'one', 'two', 'three', 'four', 'five', 'six', 'seven', 'eight', 'nine', 'ten']
const words = (count: number): string => numerals[count] ?? String(count)

function DecisionNotes({ verify }: { verify: VerifyResult }) {
  return decisionSentences(verify).map((sentence) => (
    <p key={sentence} className="mt-0.5 text-body text-ink-2">
      {sentence}
    </p>
  ))
}

/** A pass measured with codes loaded: each point against the tolerance, and the codes that the pass leads to. */
function AsLeft(props: StepProps) {
  const { page, bench } = props
  const { answer } = page
  const trim = answer.answer?.trim
  const { range, targetV } = bench.channel
  return (
    <Section
      heavy
      title={<Numbered n={3}>{`As left, pass ${page.pass}`}</Numbered>}
      side={<PasteHint isFixed={page.isFixed} />}
    >
      <GridWithTools {...props} />
      {answer.verify && !answer.isStale ? (
        <p className="mt-2 text-text">
          <Verdict verdict={answer.verify.outcome} /> {outcomeSentence(answer.verify, range, targetV)}
        </p>
      ) : null}
      {page.left ? <DecisionNotes verify={page.left} /> : null}
      {trim && !answer.isStale && page.loaded === null
        ? effectSentences(trim.effects, page.pass - 1).map((sentence) => (
            <p key={sentence} className="mt-0.5 text-body text-ink-2">
              {sentence}
            </p>
          ))
        : null}
      {trim?.verdict === 'suspect' && page.recording.recorded === null ? (
        <div className="mt-3">
          <Doubt {...props} />
        </div>
      ) : null}
      {page.loaded === null ? (
        <div className="mt-2">
          <Prediction {...props} />
        </div>
      ) : null}
      <FitOfPage {...props} />
      {trim?.verdict === 'out-of-reach' && answer.answer && bench.trim ? (
        <div className="mt-3">
          <ShortfallTable fit={answer.answer.fit} trim={trim} trimmers={bench.trim.trimmers} range={range} />
        </div>
      ) : null}
    </Section>
  )
}
