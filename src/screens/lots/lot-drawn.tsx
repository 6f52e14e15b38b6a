import { lazy, Suspense, useDeferredValue, useMemo } from 'react'
import type { Design } from '../../../shared/contract/design.ts'
import type { LotDetail, LotUnit } from '../../../shared/contract/lots.ts'
import { converterRange, limitInVolts } from '../../../shared/solver/converter.ts'
import { individualsChart } from '../../../shared/solver/lots/individuals.ts'
import { type Analysis, analyse, type Side, type Which } from '../../features/lot/analyse.ts'
import { CapabilityTable } from '../../features/lot/capability-table.tsx'
import { ErrorHistogram } from '../../features/lot/error-histogram.tsx'
import { IndividualsPlot, type Series } from '../../features/lot/individuals-plot.tsx'
import { LeftPlot } from '../../features/lot/left-plot.tsx'
import { differs, StationSentence } from '../../features/lot/lot-sentences.tsx'
import { useMarkReference } from '../../features/lot/queries.ts'
import { shownRange } from '../../features/lot/shown-range.ts'
import { StationPlot } from '../../features/lot/station-plot.tsx'
import { usePerson } from '../../features/session/use-person.ts'
import { Problem } from '../../ui/problem.tsx'
import { NotOnPaper, WhenNear } from '../../ui/when-near.tsx'
import { PlaceChoice } from './place-choice.tsx'
import { useComparison } from './use-comparison.ts'

// Far down the page: its rows and what scrolls them come when they are about to be seen.
const UnitTable = lazy(() => import('../../features/lot/unit-table.tsx'))

type Props = {
  lot: LotDetail
  design: Design
  units: readonly LotUnit[]
  search: URLSearchParams
  onSearch: (change: Record<string, string | null>) => void
}

/** What is computed and drawn of a lot: distributions, chart, stations, capability, as left, units. */
export default function LotDrawn({ lot, design, units: newest, search, onSearch }: Props) {
  const { role } = usePerson()
  // Ten thousand units take a moment: the page answers keys meanwhile.
  const units = useDeferredValue(newest)
  const range = shownRange(design, units, search.get('range'))
  const channel = design.channels.find((name) => name === search.get('channel')) ?? null
  const analysis = useMemo(
    () => analyse(design, units, range.id, channel),
    [design, units, range.id, channel],
  )
  const stations = useMemo(
    () => [...new Set(analysis.points.map(({ station }) => station))].sort((a, b) => (a < b ? -1 : 1)),
    [analysis],
  )
  const which = shownSide(analysis, search.get('chart'))
  const side = which === null ? null : analysis[which]
  const series = search.get('chart') === 'left' ? leftSeries(analysis) : side
  const reference = useMarkReference(lot.design)
  return (
    <>
      <PlaceChoice design={design} range={range.id} channel={channel} onSearch={onSearch} />
      {side === null ? (
        <p className="my-3 text-text">{`Design ${lot.design} has no adjuster in this range: there is no reach.`}</p>
      ) : null}
      <div className="mt-3 grid gap-x-7 gap-y-3 wide:grid-cols-2 print:grid-cols-2">
        {analysis.gain ? <ErrorHistogram side={analysis.gain} points={analysis.points} /> : null}
        {analysis.offset ? <ErrorHistogram side={analysis.offset} points={analysis.points} /> : null}
      </div>
      {series !== null && analysis.points.length > 0 ? (
        <div className="mt-3">
          <IndividualsPlot
            side={series}
            points={analysis.points}
            stations={stations}
            choices={choicesOf(analysis)}
            onChoice={(chart) => onSearch({ chart })}
          />
        </div>
      ) : null}
      <div className="mt-3 grid gap-x-7 gap-y-3 wide:grid-cols-2 print:grid-cols-2">
        <Stations lot={lot} range={range.id} side={side} />
        <div className="min-w-0 space-y-3">
          <CapabilityTable analysis={analysis} />
          <LeftPlot
            values={analysis.points.flatMap(({ left }) => left ?? [])}
            toleranceLsb={toleranceOf(design, range.id)}
          />
        </div>
      </div>
      <Problem error={reference.error} />
      <div className="mt-3">
        <WhenNear name="units" minHeight={480}>
          <Suspense fallback={<NotOnPaper what="Units" />}>
            <UnitTable
              units={units}
              find={search.get('find') ?? ''}
              onFind={(find) => onSearch({ find })}
              onReference={
                role === 'engineer' ? (unit, on) => reference.mutate({ unit, reference: on }) : undefined
              }
            />
          </Suspense>
        </WhenNear>
      </div>
    </>
  )
}

function shownSide(analysis: Analysis, asked: string | null): Which | null {
  if (asked === 'offset' && analysis.offset) return 'offset'
  if (analysis.gain) return 'gain'
  return analysis.offset ? 'offset' : null
}

/** Worst errors as left of the channels that were verified, as a chart of their own; null where none was. */
function leftSeries({ points }: Analysis): Series | null {
  const values = points.flatMap(({ left }) => left ?? [])
  return values.length === 0 ? null : { which: 'left', unit: 'LSB', chart: individualsChart(values) }
}

const choicesOf = ({ gain, offset, points }: Analysis): [string, string][] => [
  ...(gain ? [['gain', 'gain'] as [string, string]] : []),
  ...(offset ? [['offset', 'offset'] as [string, string]] : []),
  ...(points.some(({ left }) => left !== null) ? [['left', 'as left'] as [string, string]] : []),
]

function toleranceOf(design: Design, rangeId: string): number | null {
  const tolerance = design.decision?.tolerance
  if (!tolerance) return null
  const range = converterRange(design, rangeId)
  return limitInVolts(tolerance, range) / range.lsbV
}

type StationsProps = { lot: LotDetail; range: string; side: Side | null }

function Stations({ lot, range, side }: StationsProps) {
  const { comparison, error } = useComparison(lot, range, side?.which ?? 'gain')
  const unit = side?.unit ?? 'ppm'
  if (error) return <Problem error={error} />
  if (!comparison || comparison.lines.length === 0) return <div />
  return (
    <div className="min-w-0">
      <StationPlot comparison={comparison} which={side?.which ?? 'gain'} unit={unit} />
      {differs(comparison) && side?.which !== 'offset' ? null : (
        <StationSentence comparison={comparison} what={side?.which ?? 'gain'} unit={unit} />
      )}
    </div>
  )
}
