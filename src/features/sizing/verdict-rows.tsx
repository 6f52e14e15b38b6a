import { Verdict } from '../../ui/verdict.tsx'
import type { Explained } from './explained.ts'
import { ExplainedSentence } from './explained-sentence.tsx'
import { verdictNames } from './ladder-words.ts'
import { verdictLines } from './verdict-lines.ts'

export type VerdictRowsProps = Explained & {
  /** Takes the person to a field of the design, by JSON pointer. */
  onField?: ((path: string) => void) | undefined
}

/** The answer in words, an adjuster a row; each number explains itself. Its texts: `verdictTexts`. */
export function VerdictRows({ design, result, onField }: VerdictRowsProps) {
  return (
    <div className="grid gap-x-6 gap-y-1 text-text narrow:grid-cols-[max-content_1fr]">
      {verdictLines({ design, result }).map(({ which, verdict, headline, pieces, remedy, plain }) => (
        <div key={which} className="contents">
          <Verdict verdict={verdictNames[verdict]} word={headline} />
          <div>
            <p>
              <ExplainedSentence pieces={pieces} design={design} result={result} onField={onField} />{' '}
              {remedy ? <strong className="font-semibold">{remedy}</strong> : null}
            </p>
            <p className="text-body text-ink-2">{plain}</p>
          </div>
        </div>
      ))}
      {result.remarks.map(({ path, message }) => (
        <p key={`${path} ${message}`} className="col-span-full text-body text-ink-2">
          {message}
        </p>
      ))}
    </div>
  )
}
