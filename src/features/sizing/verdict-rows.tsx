import { verdictSentences } from '../../../shared/design-words/verdict-sentences.ts'
import type { SizeResult, SizingDesign } from '../../../shared/solver/sizing/types.ts'
import { Verdict } from '../../ui/verdict.tsx'
import { ExplainedSentence } from './explained-sentence.tsx'
import { verdictNames } from './ladder-words.ts'
import { verdictNumbers } from './verdict-numbers.ts'

export type VerdictRowsProps = {
  design: SizingDesign
  result: SizeResult
  /** Takes the person to a field of the design, by JSON pointer. */
  onField?: ((path: string) => void) | undefined
}

/** The answer in words, an adjuster a row; each number explains itself. */
export function VerdictRows({ design, result, onField }: VerdictRowsProps) {
  return (
    <div className="grid gap-x-6 gap-y-1 text-text narrow:grid-cols-[max-content_1fr]">
      {verdictSentences(design, result).map(
        ({ which, verdict, headline, plain, reach, step, bits, remedy }) => {
          const size = result.adjusters[which]
          return (
            <div key={which} className="contents">
              <Verdict verdict={verdictNames[verdict]} word={headline} />
              <div>
                <p>
                  <ExplainedSentence
                    sentence={`${reach} ${step} ${bits}`}
                    numbers={size ? verdictNumbers(which, size) : []}
                    design={design}
                    result={result}
                    onField={onField}
                  />{' '}
                  {remedy ? <strong className="font-semibold">{remedy}</strong> : null}
                </p>
                <p className="text-body text-ink-2">{plain}</p>
              </div>
            </div>
          )
        },
      )}
      {result.remarks.map(({ path, message }) => (
        <p key={`${path} ${message}`} className="col-span-full text-body text-ink-2">
          {message}
        </p>
      ))}
    </div>
  )
}
