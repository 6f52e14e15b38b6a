import { memo, useMemo } from 'react'
import { endsText } from '../../features/design-form/exact-text.ts'
import { SpanTable } from '../../features/sizing/span-table.tsx'
import { TrimLadder } from '../../features/sizing/trim-ladder.tsx'
import { VerdictRows } from '../../features/sizing/verdict-rows.tsx'
import { type Answer, picturesOf } from './answer.ts'

type OnTry = (texts: Readonly<Record<string, string>>) => void
type OnField = (path: string) => void

export const Verdicts = memo(function Verdicts({ answer, onField }: { answer: Answer; onField: OnField }) {
  return <VerdictRows design={answer.design} result={answer.size} onField={onField} />
})

export const LadderAndTables = memo(function LadderAndTables({
  answer,
  problem,
  onTry,
}: {
  answer: Answer | null
  problem: string | undefined
  onTry: OnTry
}) {
  const pictures = useMemo(() => (answer ? picturesOf(answer) : null), [answer])
  const scale = answer ? { lsbV: answer.size.lsbV, fsrV: answer.fsrV } : null
  return (
    <div className="grid grid-cols-1 gap-x-5 gap-y-3 wide:grid-cols-[minmax(0,1fr)_17.5rem]">
      <TrimLadder ladders={pictures?.ladders ?? []} scale={scale} problem={problem} />
      <div className="grid min-w-0 grid-cols-1 content-start gap-x-7 gap-y-3 medium:grid-cols-2 wide:grid-cols-1">
        {pictures?.tables.map((table) => (
          <SpanTable
            key={table.which}
            table={table}
            onTry={(bits, lowV, highV) =>
              onTry({
                [`${table.which}.bits`]: `${bits} bits`,
                [`${table.which}.span`]: endsText(lowV, highV),
              })
            }
          />
        ))}
        {pictures && pictures.tables.length > 0 ? (
          <p className="text-small text-ink-3 medium:col-span-2 wide:col-span-1">
            Bits to spare: reach in the head, step in the cell. Box: this design.
          </p>
        ) : null}
      </div>
    </div>
  )
})
