import { span, volts } from '../../../shared/design-words/words.ts'
import type { NetworkResult } from '../../../shared/solver/network-synthesis/request.ts'
import type { Network } from '../../../shared/solver/types.ts'
import { exact } from '../../ui/number-format.ts'
import { Section } from '../../ui/section.tsx'
import { Table, Th } from '../../ui/table.tsx'
import { ResistorControls } from './resistor-controls.tsx'
import { resistorFormat } from './resistor-format.ts'
import type { ResistorAnswer, ResistorSettings } from './resistor-request.ts'
import { ResistorRow } from './resistor-row.tsx'

export type ResistorTableProps = {
  answer: ResistorAnswer
  /** Volts at the output per volt at the node: `outputPerV` of the adjuster's size. */
  outputPerV: number
  settings: ResistorSettings
  onSettings: (settings: ResistorSettings) => void
  /** Writes the values into the form; left out, the table only shows. */
  onUse?: ((network: Network) => void) | undefined
}

/** What the form holds, then value sets out of the series that cover at every corner of the tolerance. */
export function ResistorTable({ answer, outputPerV, settings, onSettings, onUse }: ResistorTableProps) {
  const which = 'result' in answer ? answer.result.adjuster : null
  return (
    <Section
      title={which === null ? 'Resistors' : `Resistors for the ${which} network`}
      note={'result' in answer ? <Note result={answer.result} /> : undefined}
    >
      <ResistorControls settings={settings} onSettings={onSettings} name={which ?? 'network'} />
      {'refusal' in answer ? (
        <p className="py-1 text-text">{answer.refusal}</p>
      ) : (
        <Candidates result={answer.result} outputPerV={outputPerV} onUse={onUse} />
      )}
    </Section>
  )
}

/** Series and limits stand in the controls; paper has none. */
function Note({ result }: { result: NetworkResult }) {
  const { series, tolerance, maxSourceOhm, maxCurrentA, wantedLowV, wantedHighV } = result
  const asked = [`${series}, ${Number((tolerance * 100).toPrecision(3))} %`]
  if (maxSourceOhm !== null) asked.push(`source under ${exact(maxSourceOhm, 'Ω')}`)
  if (maxCurrentA !== null) asked.push(`load under ${exact(maxCurrentA, 'A')}`)
  return (
    <>
      <span className="hidden print:inline">{asked.join(', ')}; </span>
      need {span(wantedLowV, wantedHighV)} at the node
    </>
  )
}

type CandidatesProps = {
  result: NetworkResult
  outputPerV: number
  onUse: ((network: Network) => void) | undefined
}

function Candidates({ result, outputPerV, onUse }: CandidatesProps) {
  const { own, candidates, obstacle } = result
  const isShifted = [own, ...candidates].some((one) => one?.network.kind === 'shifted')
  const format = resistorFormat(own ? [own, ...candidates] : candidates, outputPerV)
  const common = { isShifted, outputPerV, format }
  return (
    <>
      {obstacle === null ? null : <p className="py-1 text-text">{obstacle}</p>}
      <Table caption={`Resistors for the ${result.adjuster} network`}>
        <thead>
          <tr>
            <Th>
              <span className="sr-only">act</span>
            </Th>
            <Th align="right" unit="kΩ">
              R top
            </Th>
            {isShifted && (
              <Th align="right" unit="kΩ">
                R shift
              </Th>
            )}
            <Th align="right" unit="kΩ">
              R bottom
            </Th>
            <Th align="right" unit="mV">
              reach
            </Th>
            <Th align="right" unit="mV">
              worst corner
            </Th>
            <Th align="right" unit="bits">
              over need
            </Th>
            <Th align="right" unit={format.stepUnit}>
              step at output
            </Th>
            <Th align="right" unit="kΩ">
              source
            </Th>
            <Th align="right" unit="µA">
              DAC load
            </Th>
          </tr>
        </thead>
        <tbody>
          {own && (
            <ResistorRow {...common} candidate={own} act={<span className="font-semibold">now</span>} isOwn />
          )}
          {candidates.map((candidate) => (
            <ResistorRow
              key={JSON.stringify(candidate.network)}
              {...common}
              candidate={candidate}
              isNearest={obstacle !== null}
              onUse={onUse}
            />
          ))}
        </tbody>
      </Table>
      {own ? null : (
        <p className="mt-1 text-small text-ink-3">
          Now: the auxiliary DAC goes straight to the node, {volts(result.wantedLowV)} to{' '}
          {volts(result.wantedHighV)}.
        </p>
      )}
    </>
  )
}
