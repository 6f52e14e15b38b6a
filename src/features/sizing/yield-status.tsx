import { Whole } from '../../ui/number-text.tsx'
import type { YieldState } from './use-yield.ts'

/** Where the simulation stands, in one sentence. */
export function YieldStatus(props: { state: YieldState; problem: string | null; isOfThis: boolean }) {
  const { state, problem, isOfThis } = props
  return (
    <p className="text-body text-ink-2" aria-live="polite">
      {problem ?? sentence(state, isOfThis)}
    </p>
  )
}

function sentence(state: YieldState, isOfThis: boolean) {
  if (state.is === 'idle') {
    return (
      <>
        <span className="print:hidden">
          Units drawn from the budget, measured by the plan, trimmed and judged.
        </span>
        <span className="hidden print:inline">Not simulated.</span>
      </>
    )
  }
  if (state.is === 'failed') return <span className="text-ink">{state.message}</span>
  if (state.is === 'running') {
    return (
      <>
        Simulating, <Whole value={state.done} /> of <Whole value={state.trials} />.
      </>
    )
  }
  if (!isOfThis) return 'Of the design before the last change. Simulate again.'
  if (!state.result.stopped) return null
  return (
    <>
      Stopped at <Whole value={state.result.trials} />. The interval is wider for it.
    </>
  )
}
