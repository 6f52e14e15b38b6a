import { memo, Suspense, useState } from 'react'
import { both, type Which } from '../../features/design-form/form-doc.ts'
import { YieldPanel } from '../../features/sizing/on-demand.ts'
import { PassForecast } from '../../features/sizing/pass-forecast.tsx'
import { ResidualBars } from '../../features/sizing/residual-bars.tsx'
import { usualSettings } from '../../features/sizing/resistor-request.ts'
import { ResistorTable } from '../../features/sizing/resistor-table.tsx'
import { useResistors } from '../../features/sizing/use-resistors.ts'
import type { Answer } from './answer.ts'
import { networkTexts } from './network-texts.ts'

type Texts = Readonly<Record<string, string>>

/** Residual, resistors and yield. */
export default memo(function Lower({
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
      {both.map((which) =>
        design.adjusters[which] && design.adjusters[which].network.kind !== 'direct' ? (
          <Resistors key={which} answer={answer} which={which} onUse={onUse} />
        ) : null,
      )}
      <Suspense fallback={null}>
        <YieldPanel design={design} rangeId={size.range} isReady={isReady} />
      </Suspense>
      <PassForecast design={design} result={size} onField={onField} />
    </div>
  )
})

function Resistors({
  answer: { design, size },
  which,
  onUse,
}: {
  answer: Answer
  which: Which
  onUse: ((texts: Texts) => void) | undefined
}) {
  const [settings, setSettings] = useState(usualSettings)
  const found = useResistors(design, size, which, settings)
  if (found === null) return null
  return (
    <ResistorTable
      answer={found}
      outputPerV={size.adjusters[which]?.outputPerV ?? 0}
      settings={settings}
      onSettings={setSettings}
      onUse={onUse ? (network) => onUse(networkTexts(which, network)) : undefined}
    />
  )
}
