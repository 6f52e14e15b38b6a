import { useMemo, useState } from 'react'
import type { Design } from '../../../shared/contract/design.ts'
import type { FieldError } from '../../../shared/errors.ts'
import type { PreviousPass } from '../../../shared/solver/learn.ts'
import type { Applied } from '../../../shared/solver/types.ts'
import { buildViews } from './build-views.ts'
import type { Row } from './grid-state.ts'
import { barsOf, judge } from './judge.ts'
import { cellProblems } from './problems.ts'
import { readRows } from './read-cells.ts'
import { farProblems, rereadUnit } from './reread.ts'
import { type Answer, type Bench, solve } from './solve.ts'
import { useArithmetic } from './use-arithmetic.ts'

type Asked = {
  design: Design
  bench: Bench
  rows: readonly Row[]
  applied: Applied | null
  previous: PreviousPass | null
  /** Refusals of the server at points, shown at their cells until the cells change. */
  refused: readonly FieldError[]
}

/** The answer while typing: recomputed on every key, the last good one kept while a cell is in error. */
export function useAnswer(asked: Asked) {
  const { design, bench, rows, applied, previous, refused } = asked
  const arithmetic = useArithmetic()
  const read = useMemo(() => readRows(rows, arithmetic), [rows, arithmetic])
  const solved = useMemo(
    () => solve(bench, read.points, { applied, previous }),
    [bench, read.points, applied, previous],
  )
  const problems = useMemo(() => {
    const own = solved.is === 'refused' ? cellProblems(solved.error.errors, read.rowOf).cells : []
    return [...read.problems, ...own, ...cellProblems(refused, read.rowOf).cells]
  }, [read, solved, refused])
  const isWrong = problems.length > 0 || solved.is === 'refused'
  const isBusy = read.isPending
  const { good, isStale } = useLastGood(
    solved.is === 'answer' && !isWrong && !isBusy ? solved.answer : null,
    {
      isEmpty: solved.is === 'waiting' && !isWrong && !isBusy,
    },
  )
  const verify = useMemo(
    () => (isWrong ? null : judge(design, bench, read.points)),
    [isWrong, design, bench, read],
  )
  const bars = useMemo(
    () => (isWrong ? null : barsOf(design, bench, read.points)),
    [isWrong, design, bench, read],
  )
  const views = useMemo(
    () =>
      buildViews(read.rows, problems, bench.channel.range, {
        fit: isStale ? null : (good?.answer.fit ?? null),
        verify,
      }),
    [read, problems, bench, good, isStale, verify],
  )
  const allowedV = (design.measurement.plausiblePercent / 100) * bench.channel.range.fsrV
  const far = farProblems(problems, read.rows, bench.channel.range, allowedV)
  return {
    read,
    views,
    problems,
    solved,
    answer: good?.answer ?? null,
    answeredAt: good?.at ?? null,
    isStale,
    isReady: good !== null && !isStale,
    verify,
    bars,
    far,
    rereadAs: rereadUnit(far, rows, read.rows, bench.channel.range, allowedV),
  }
}

/** `null` for a moment without an answer; `isEmpty` when there is nothing to answer at all. */
function useLastGood(answer: Answer | null, { isEmpty }: { isEmpty: boolean }) {
  const [good, setGood] = useState<{ answer: Answer; at: Date } | null>(null)
  if (answer && good?.answer !== answer) setGood({ answer, at: new Date() })
  if (isEmpty && good) setGood(null)
  return {
    good: answer && good?.answer !== answer ? { answer, at: new Date() } : good,
    isStale: answer === null && good !== null,
  }
}
