import { type ReactNode, useRef } from 'react'
import { doubtfulCode } from '../../features/bench/flag-sentences.ts'
import { codesText, passName } from '../../features/bench/words.ts'
import { Button } from '../../ui/button.tsx'
import { KeyHint } from '../../ui/key-hint.tsx'
import { Whole } from '../../ui/number-text.tsx'
import { PageHead } from '../../ui/page-head.tsx'
import { utcText } from '../../ui/time-text.tsx'
import { type VerdictName, verdictWord } from '../../ui/verdict.tsx'
import type { BenchPageProps } from './bench-props.ts'
import { findStop } from './stops.ts'
import type { BenchActs } from './use-bench-acts.ts'
import type { BenchPageState } from './use-bench-page.ts'

type HeadProps = BenchPageProps & { page: BenchPageState; acts: BenchActs; onOpenFile: (file: File) => void }

export function BenchHead(props: HeadProps) {
  const { search, channel, page } = props
  const title = search.unit === null ? 'No unit yet' : `Unit ${search.unit}, channel ${channel}`
  return (
    <PageHead
      place="Bench"
      title={search.unit === null ? `${title}, channel ${channel}` : title}
      state={<State {...props} />}
      acts={<Acts {...props} />}
      tab={search.unit === null ? 'Bench' : `${search.unit}, pass ${page.pass}`}
    />
  )
}

function State({ known, page }: HeadProps) {
  const last = known.followed
  const { current } = known
  const draft = page.hasReadings && !page.isFixed ? ' · draft kept on this computer' : ''
  if (last) {
    const verdict = last.verdict === null ? '' : `${verdictWord(last.verdict as VerdictName)}, `
    return (
      <>
        pass {page.pass} of this unit · follows record <Whole value={last.number} /> ({verdict}
        {utcText(last.recordedAt).slice(11)} UTC){draft}
      </>
    )
  }
  if (!current || current.pass === 0) return <>no pass recorded{draft}</>
  const passes = current.pass === 1 ? '1 pass recorded' : `${current.pass} passes recorded`
  return (
    <>
      {passes} · {current.codes ? `codes ${codesText(current.codes)}` : 'no accepted codes'}
      {current.number === null ? null : (
        <>
          {' '}
          from record <Whole value={current.number} />
        </>
      )}
      {draft}
    </>
  )
}

function Acts({ page, acts, onOpenFile }: HeadProps) {
  return (
    <>
      <Button look="quiet" onClick={acts.showIdeal}>
        Ideal values
      </Button>
      {page.hasReadings || page.isFixed ? null : <OpenFile onOpen={onOpenFile} />}
      {page.recording.recorded === null && acts.next ? (
        <Button onClick={acts.goNext}>
          {passName(acts.next.pass)}
          <KeyHint keys="p" />
        </Button>
      ) : null}
      <PrimaryAct page={page} acts={acts} />
    </>
  )
}

/** One primary act: read the doubtful code again, record, or go on with the next pass. */
function PrimaryAct({ page, acts }: { page: BenchPageState; acts: BenchActs }): ReactNode {
  const { recording, answer } = page
  if (recording.recorded) {
    // What passed as left is done; everything else goes on with the next pass.
    const isDone = acts.next === null || (recording.recorded.kind === 'verify' && recording.recorded.accepted)
    const unit = (
      <Button key="unit" look={isDone ? 'primary' : 'plain'} onClick={() => acts.changeUnit('')}>
        Next unit
      </Button>
    )
    const pass = acts.next ? (
      <Button key="pass" look={isDone ? 'plain' : 'primary'} onClick={acts.goNext}>
        {passName(acts.next.pass)}
        <KeyHint keys="p" className={isDone ? '' : '!text-paper'} />
      </Button>
    ) : null
    return isDone ? [pass, unit] : [unit, pass]
  }
  const verdict = answer.isStale ? undefined : answer.answer?.trim?.verdict
  const code = answer.answer ? doubtfulCode(answer.answer.fit.flags) : null
  if (verdict === 'suspect' && code !== null && !page.isFixed) {
    const row = answer.views.findIndex((view) => view.code === code)
    return (
      <Button look="primary" onClick={() => findStop(`cell-${row}`)?.focus()}>
        Read code <Whole value={code} /> again
      </Button>
    )
  }
  return <RecordActs page={page} acts={acts} />
}

/** Measured with codes loaded there are two: as left, and the codes that these points lead to. */
function RecordActs({ page, acts }: { page: BenchPageState; acts: BenchActs }) {
  const { recording, answer } = page
  const trim = answer.answer?.trim
  const verdict = answer.isStale ? undefined : trim?.verdict
  const isOpen = page.shut === null && !page.isFixed
  const pass = page.pass > 1 ? `Record pass ${page.pass}` : 'Record'
  const codes = {
    as: 'trim',
    text: verdict === 'out-of-reach' ? 'Record out of reach' : pass,
    isReady: isOpen && answer.isReady && Boolean(trim) && verdict !== 'suspect',
    run: () => acts.record(null),
  }
  const left = { as: 'verify', text: 'Record as left', isReady: isOpen, run: acts.recordLeft }
  const offered = page.left === null ? [codes] : [codes, left]
  const inOrder = [...offered].sort((a, b) => Number(a.as === acts.primary) - Number(b.as === acts.primary))
  return inOrder.map(({ as, text, isReady, run }) => {
    const isPrimary = as === acts.primary
    return (
      <Button
        key={as}
        look={isPrimary ? 'primary' : 'plain'}
        disabled={!isReady}
        aria-describedby={isPrimary && acts.missing ? 'record-missing' : undefined}
        onClick={run}
      >
        {isPrimary && recording.isBusy ? 'Recording' : text}
        {isPrimary ? <KeyHint keys="Ctrl Enter" className="!text-paper" /> : null}
      </Button>
    )
  })
}

function OpenFile({ onOpen }: { onOpen: (file: File) => void }) {
  const input = useRef<HTMLInputElement>(null)
  return (
    <>
      <Button onClick={() => input.current?.click()}>Open CSV</Button>
      <input
        ref={input}
        type="file"
        accept=".csv,.tsv,.txt,text/csv"
        aria-label="Points CSV"
        tabIndex={-1}
        className="sr-only"
        onChange={(event) => {
          const file = event.target.files?.[0]
          event.target.value = ''
          if (file) onOpen(file)
        }}
      />
    </>
  )
}
