import { lazy, memo, Suspense, useState } from 'react'
import { PassForecast } from '../../features/sizing/pass-forecast.tsx'
import { ResidualBars } from '../../features/sizing/residual-bars.tsx'
import { NotOnPaper, WhenNear } from '../../ui/when-near.tsx'
import type { Answer } from './answer.ts'

const Choices = lazy(() => import('./choices.tsx'))

type Texts = Readonly<Record<string, string>>

/** Residual and passes; then, once they are near, resistors and yield. */
export const Lower = memo(function Lower({
  answer,
  isReady,
  onUse,
  onField,
}: {
  answer: Answer
  isReady: boolean
  onUse: ((texts: Texts) => void) | undefined
  onField: (path: string) => void
}) {
  const { design, size } = answer
  const [unit, setUnit] = useState<'V' | 'LSB' | 'ppm'>('V')
  return (
    <div className="space-y-3.5">
      <ResidualBars design={design} result={size} unit={unit} onUnit={setUnit} onField={onField} />
      <WhenNear name="choices" minHeight={400}>
        <Suspense fallback={<NotOnPaper what="Resistors and simulated yield" />}>
          <Choices answer={answer} isReady={isReady} onUse={onUse} />
        </Suspense>
      </WhenNear>
      <PassForecast design={design} result={size} onField={onField} />
    </div>
  )
})
