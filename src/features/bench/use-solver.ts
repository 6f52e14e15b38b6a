import { useEffect, useState } from 'react'

/** Solving and judging load with the first point and stay: every key after that is answered at once. */
const load = async () => {
  const [{ solve }, { barsOf, judge }] = await Promise.all([import('./solving.ts'), import('./judge.ts')])
  return { solve, barsOf, judge }
}

type Solver = Awaited<ReturnType<typeof load>>
let loaded: Solver | null = null

/** The solver once it is wanted and there; null until then. */
export function useSolver(isWanted: boolean): Solver | null {
  const [solver, setSolver] = useState(loaded)
  const isMissing = isWanted && solver === null
  useEffect(() => {
    if (!isMissing) return
    void load().then((module) => {
      loaded = module
      setSolver(module)
    })
  }, [isMissing])
  return solver
}
