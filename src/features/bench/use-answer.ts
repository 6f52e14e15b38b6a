import { useMemo, useState } from 'react'
import type { Design } from '../../../shared/contract/design.ts'
import type { Point } from '../../../shared/contract/point.ts'
import type { FieldError } from '../../../shared/errors.ts'
import type { PreviousPass } from '../../../shared/solver/learn.ts'
import type { Applied, VerifyResult } from '../../../shared/solver/types.ts'
import { buildViews } from './build-views.ts'
import type { Row } from './grid-state.ts'
import { cellProblems } from './problems.ts'
import { readRows } from './read-cells.ts'
import { farProblems, type RereadUnit, rereadRows, rereadUnit } from './reread.ts'
import type { Answer, Bench, Solved } from './solve.ts'
import { useArithmetic } from './use-arithmetic.ts'
import { useSolver } from './use-solver.ts'

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
  const solver = useSolver(read.points.length > 0)
  const solved = useMemo(
    (): Solved => solver?.solve(bench, read.points, { applied, previous }) ?? { is: 'waiting' },
    [solver, bench, read.points, applied, previous],
  )
  const problems = useMemo(() => {
    const own = solved.is === 'refused' ? cellProblems(solved.error.errors, read.rowOf).cells : []
    return [...read.problems, ...own, ...cellProblems(refused, read.rowOf).cells]
  }, [read, solved, refused])
  const isWrong = problems.length > 0 || solved.is === 'refused'
  const isBusy = read.isPending
  const now = useMemo(
    () =>
      solver && solved.is === 'answer' && !isWrong && !isBusy
        ? { answer: solved.answer, points: read.points, bars: solver.barsOf(design, bench, read.points) }
        : null,
    [solver, solved, isWrong, isBusy, read.points, design, bench],
  )
  const { good, isStale } = useLastGood(now, solved.is === 'waiting' && !isWrong && !isBusy)
  const verify = useMemo(
    () => (isWrong ? null : (solver?.judge(design, bench, read.points) ?? null)),
    [solver, isWrong, design, bench, read],
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
    /** Of the last good answer, as the plots draw it. */
    plotted: good,
    far,
    reread: (unit: RereadUnit) => rereadRows(rows, read.rows, far, unit, bench.channel.range, allowedV),
    rereadAs: rereadUnit(far, rows, read.rows, bench.channel.range, allowedV),
  }
}

type Good = { answer: Answer; points: readonly Point[]; bars: VerifyResult | null }

/** Null is a moment without an answer: the last one stays. With nothing to answer at all there is none. */
function useLastGood(now: Good | null, isEmpty: boolean) {
  const [last, setLast] = useState<(Good & { at: Date }) | null>(null)
  const isNew = now !== null && last?.answer !== now.answer
  const current = isNew ? { ...now, at: new Date() } : last
  if (isNew) setLast(current)
  if (isEmpty && last) setLast(null)
  return { good: isEmpty ? null : current, isStale: now === null && last !== null && !isEmpty }
}
