import type { CodesDocument } from '../../../shared/contract/codes.ts'
import type { Record as TrimRecord } from '../../../shared/contract/record.ts'
import type { VerifyDocument } from '../../../shared/contract/verify.ts'
import { FlagSentences } from '../../features/record/flag-sentences.tsx'
import { FoundTable, LeftTable } from '../../features/record/measured-table.tsx'
import { noteSentences } from '../../features/record/note-words.ts'
import { CodesTable, LineTable, Shortfall } from '../../features/record/result-section.tsx'
import { lsbOf } from '../../features/record/volt-decimals.ts'
import { engineering, fixed } from '../../ui/number-format.ts'
import { Whole } from '../../ui/number-text.tsx'
import { Section } from '../../ui/section.tsx'
import { Verdict } from '../../ui/verdict.tsx'

export function RecordResult({ record }: { record: TrimRecord }) {
  const { result } = record
  if (result === null) return null
  return result.format === 'ogee.codes/1' ? <TrimResult result={result} /> : <VerifyResult result={result} />
}

function TrimResult({ result }: { result: CodesDocument }) {
  const { fit, trim } = result
  const lsbV = lsbOf(fit.residuals) ?? 1e-6
  return (
    <div className="grid grid-cols-1 gap-x-7 gap-y-3.5 wide:grid-cols-2">
      <Section title="As found, as measured" note={`${fit.n} points`}>
        <FoundTable fit={fit} lsbV={lsbV} />
        <div className="mt-2">
          <FlagSentences flags={fit.flags} />
        </div>
      </Section>
      <Section title="Result" side={`solver ${result.solver}`}>
        <CodesTable trim={trim} />
        <div className="mt-2">
          <LineTable fit={fit} />
        </div>
        <p className="mt-2 text-text">
          <Verdict verdict={trim.verdict} />{' '}
          {trim.predicted
            ? `Predicted worst ${fixed(trim.predicted.worstLsb, 2)} LSB, ${engineering(trim.predicted.worstV, 'V')}, at ${engineering(trim.predicted.atV, 'V', 4)}.`
            : 'No code is given. A clipped code is not a trim.'}
        </p>
        <Shortfall trim={trim} />
        <ul className="text-ink-2">
          {noteSentences([...trim.reasons, ...trim.notes, ...fit.notes]).map((sentence) => (
            <li key={sentence}>{sentence}</li>
          ))}
        </ul>
      </Section>
    </div>
  )
}

function VerifyResult({ result }: { result: VerifyDocument }) {
  const lsbV = lsbOf(result.points) ?? 1e-6
  return (
    <div className="grid grid-cols-1 gap-x-7 gap-y-3.5 wide:grid-cols-2">
      <Section title="As left, as measured" note={`${result.points.length} points`}>
        <LeftTable verify={result} lsbV={lsbV} />
      </Section>
      <Section title="Result" side={`solver ${result.solver}`}>
        <p className="mb-1.5 text-text">
          <Verdict verdict={result.outcome} /> Worst {fixed(result.worst.errorLsb, 2, 'always')} LSB at code{' '}
          <Whole value={result.worst.code} />. Rule {result.rule}, tolerance{' '}
          {engineering(result.toleranceV, 'V')}
          {result.tur === null ? '' : `, test uncertainty ratio ${fixed(result.tur, 1)}`}.
        </p>
        {result.fit ? <LineTable fit={result.fit} /> : null}
      </Section>
    </div>
  )
}
