import { useState } from 'react'
import { both, type Which } from '../../features/design-form/form-doc.ts'
import { YieldPanel } from '../../features/sizing/on-demand.ts'
import { usualSettings } from '../../features/sizing/resistor-request.ts'
import { ResistorTable } from '../../features/sizing/resistor-table.tsx'
import { useResistors } from '../../features/sizing/use-resistors.ts'
import { NotOnPaper } from '../../ui/when-near.tsx'
import type { Answer } from './answer.ts'
import { networkTexts } from './network-texts.ts'

type Texts = Readonly<Record<string, string>>
type ChoicesProps = { answer: Answer; isReady: boolean; onUse: ((texts: Texts) => void) | undefined }

/** Resistors to choose and yield to simulate. */
export default function Choices({ answer, isReady, onUse }: ChoicesProps) {
  const { design, size } = answer
  return (
    <div className="space-y-3.5">
      {both.map((which) =>
        design.adjusters[which] && design.adjusters[which].network.kind !== 'direct' ? (
          <Resistors key={which} answer={answer} which={which} onUse={onUse} />
        ) : null,
      )}
      <YieldPanel design={design} rangeId={size.range} isReady={isReady} />
    </div>
  )
}

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
  if (found === null) return <NotOnPaper what={`Resistors for the ${which} network`} />
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
