import { Button } from '../../ui/button.tsx'
import { Caution } from '../../ui/caution.tsx'
import { Digits } from './flag-list.tsx'
import { problemId } from './grid-row.tsx'
import type { CellProblem } from './problems.ts'

type CellProblemsProps = {
  problems: readonly CellProblem[]
  /** A unit under which every far-off reading is plausible, when there is one. */
  rereadAs: 'mV' | 'µV' | null
  onReread: () => void
}

const shownMost = 6

/** The sentences of cells in error, under the grid; each cell points at its own. */
export function CellProblems({ problems, rereadAs, onReread }: CellProblemsProps) {
  if (problems.length === 0) return null
  return (
    <div className="mt-2" role="status">
      <Caution tone="bad">
        {problems.slice(0, shownMost).map((problem) => (
          <p key={`${problem.row} ${problem.column}`} id={problemId(problem.row, problem.column)}>
            <span className="sr-only">{`Row ${problem.row + 1}, ${problem.column}: `}</span>
            <Digits>{problem.message}</Digits>
          </p>
        ))}
        {problems.length > shownMost ? <p>{problems.length - shownMost} more cells are in error.</p> : null}
        {rereadAs ? (
          <p className="mt-1 flex flex-wrap items-center gap-2">
            Did you mean {rereadAs}? <Button onClick={onReread}>Read as {rereadAs}</Button>
          </p>
        ) : null}
      </Caution>
    </div>
  )
}
