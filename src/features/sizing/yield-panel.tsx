import type { SizingDesign } from '../../../shared/solver/sizing/types.ts'
import { Button } from '../../ui/button.tsx'
import { Field } from '../../ui/field.tsx'
import { TextInput } from '../../ui/input.tsx'
import { Section } from '../../ui/section.tsx'
import { type StartYieldWorker, startBuiltWorker, useYield } from './use-yield.ts'
import { YieldAnswer } from './yield-answer.tsx'
import { YieldStatus } from './yield-status.tsx'
import { useWish, type Wish } from './yield-wish.ts'

export type YieldPanelProps = {
  design: SizingDesign
  rangeId?: string | undefined
  /** Null while the design has an error: nothing is to be simulated. */
  isReady?: boolean | undefined
  /** Tests hand in a worker of their own. */
  startWorker?: StartYieldWorker | undefined
}

/** Yield by simulation, in a worker: seeded, repeatable, stopped at will. */
export default function YieldPanel(props: YieldPanelProps) {
  const { design, rangeId, isReady = true, startWorker = startBuiltWorker } = props
  const { state, start, stop } = useYield(startWorker)
  const wish = useWish()
  const isRunning = state.is === 'running'
  const run = () => {
    if (wish.options === null) return
    void start(design, { ...wish.options, rangeId })
  }
  const result = state.is === 'done' || state.is === 'running' ? state.result : null
  return (
    <Section
      title="Simulated yield"
      side={<WishFields wish={wish} isRunning={isRunning} onStart={run} isReady={isReady} onStop={stop} />}
    >
      <YieldStatus
        state={state}
        problem={wish.problem}
        isOfThis={state.is === 'done' && state.design === design}
      />
      {result && <YieldAnswer result={result} />}
    </Section>
  )
}

type WishFieldsProps = {
  wish: Wish
  isRunning: boolean
  isReady: boolean
  onStart: () => void
  onStop: () => void
}

function WishFields({ wish, isRunning, isReady, onStart, onStop }: WishFieldsProps) {
  return (
    <div className="flex flex-wrap items-center gap-x-3 gap-y-1">
      <Field label="seed" layout="inline">
        <TextInput
          value={wish.seed}
          inputMode="numeric"
          className="!w-16"
          onChange={({ target }) => wish.setSeed(target.value)}
        />
      </Field>
      <Field label="trials" layout="inline">
        <TextInput
          value={wish.trials}
          inputMode="numeric"
          className="!w-20"
          onChange={({ target }) => wish.setTrials(target.value)}
        />
      </Field>
      {isRunning ? (
        <Button onClick={onStop}>Stop</Button>
      ) : (
        <Button onClick={onStart} disabled={wish.options === null || !isReady}>
          Simulate
        </Button>
      )}
    </div>
  )
}
