import type { Design } from '../../../shared/contract/design.ts'
import type { Point } from '../../../shared/contract/point.ts'
import { limitInVolts } from '../../../shared/solver/converter.ts'
import type { FitResult, TrimResult, VerifyResult } from '../../../shared/solver/types.ts'
import { doubtfulCode } from '../../features/bench/flag-sentences.ts'
import { barsOf } from '../../features/bench/judge.ts'
import type { TrimRecord } from '../../features/bench/queries.ts'
import type { Answer, Bench } from '../../features/bench/solve.ts'
import { AsLeftPlot, type PlotPass } from '../../features/plot/as-left-plot.tsx'
import { ErrorPlot } from '../../features/plot/error-plot.tsx'
import { ReachPlot } from '../../features/plot/reach-plot.tsx'
import { ReadingsPlot } from '../../features/plot/readings-plot.tsx'
import { ResidualStrip } from '../../features/plot/residual-strip.tsx'
import { barsText, plotLine, plotPoints, plotRange, reachLines } from './plot-props.ts'

type BenchPlotsProps = {
  design: Design
  bench: Bench
  points: readonly Point[]
  answer: Answer | null
  bars: VerifyResult | null
  chain: readonly TrimRecord[]
  asTable: boolean
  onTable: (asTable: boolean) => void
}

/** Below the steps, on the same two halves: as found and as left, or what explains an answer that is none. */
export default function BenchPlots(props: BenchPlotsProps) {
  const { answer, chain } = props
  const isFirst = chain.length === 0
  const verdict = isFirst ? answer?.trim?.verdict : undefined
  return (
    <div className="mt-3 grid grid-cols-1 gap-x-7 gap-y-3 wide:grid-cols-2 print:grid-cols-2">
      {verdict === 'suspect' && answer ? (
        <Doubt {...props} fit={answer.fit} />
      ) : (
        <>
          <AsFound {...props} />
          {verdict === 'out-of-reach' && answer?.trim ? (
            <ReachPlot title="Reach used" marks={marksOf(answer.trim, props.bench)} />
          ) : (
            <AsLeft {...props} />
          )}
        </>
      )}
    </div>
  )
}

const methodWords = { 'best-fit': 'best fit', minimax: 'minimax', terminal: 'terminal' } as const

function AsFound({ design, bench, points, answer, bars, chain, asTable, onTable }: BenchPlotsProps) {
  const { range } = bench.channel
  const first = chain[0]
  const fit = first ? first.result.fit : (answer?.fit ?? null)
  const trim = first ? first.result.trim : (answer?.trim ?? null)
  const ownPoints = first?.points ?? points
  const ownBars = first ? barsOf(design, bench, ownPoints) : bars
  return (
    <ErrorPlot
      title={first ? `Error as found, pass ${first.pass}` : 'Error as found'}
      range={plotRange(range)}
      points={fit ? plotPoints(fit, ownBars) : []}
      line={fit ? plotLine(fit, range) : null}
      predicted={trim?.predicted ? plotLine(trim.predicted, range) : null}
      reach={trim?.verdict === 'out-of-reach' ? reachLines(trim as TrimResult, bench) : null}
      bars={fit ? barsText(ownPoints, fit, design.measurement.noiseV) : null}
      method={methodWords[fit?.method ?? 'best-fit']}
      asTable={asTable}
      onTable={onTable}
    />
  )
}

function AsLeft({ design, bench, points, answer, bars, chain, asTable, onTable }: BenchPlotsProps) {
  const { range } = bench.channel
  const last = chain.at(-1)
  const pass = (label: string, fit: FitResult, ownBars: VerifyResult | null): PlotPass => ({
    label,
    points: plotPoints(fit, ownBars),
    line: plotLine(fit, range),
  })
  const latest = last && answer ? pass(`pass ${last.pass + 1}`, answer.fit, bars) : null
  // A pass measured with nothing loaded is a hundred times larger and stands in the other plot.
  const earlier =
    last && last.applied !== 'neutral' && chain.length > 1
      ? pass(`pass ${last.pass}`, last.result.fit, barsOf(design, bench, last.points ?? []))
      : null
  const { decision } = design
  return (
    <AsLeftPlot
      title="Error as left, against tolerance"
      range={plotRange(range)}
      latest={latest}
      earlier={earlier}
      predicted={answer?.trim?.predicted ? plotLine(answer.trim.predicted, range) : null}
      toleranceV={decision ? limitInVolts(decision.tolerance, range) : null}
      isGuarded={decision?.rule === 'guarded'}
      bars={answer && latest ? barsText(points, answer.fit, design.measurement.noiseV) : null}
      asTable={asTable}
      onTable={onTable}
    />
  )
}

function Doubt(props: BenchPlotsProps & { fit: FitResult }) {
  const { design, bench, points, bars, fit, asTable, onTable } = props
  const { range } = bench.channel
  const code = doubtfulCode(fit.flags)
  const readings = points.find((point) => point.code === code)?.readings
  const isUnsettled = fit.flags.some((flag) => flag.flag === 'unsettled' && flag.code === code)
  return (
    <>
      {code !== null && isUnsettled && readings ? (
        <ReadingsPlot
          code={code}
          readings={readings}
          range={plotRange(range)}
          allowedLsb={design.measurement.settleLimitLsb}
          asTable={asTable}
          onTable={onTable}
        />
      ) : (
        <AsFound {...props} />
      )}
      <ResidualStrip
        title="Residual from the line"
        points={plotPoints(fit, bars)}
        range={plotRange(range)}
        caption={
          code === null
            ? 'Dots: residual of each point. No error bars: the line is the reference here.'
            : 'Diamond: the point that is flagged. No error bars: the line is the reference here.'
        }
        asTable={asTable}
        onTable={onTable}
      />
    </>
  )
}

/** Signed shares: below nominal is negative. */
function marksOf(trim: TrimResult, bench: Bench) {
  return (['gain', 'offset'] as const).flatMap((which) => {
    const used = trim.reachUsed[which]
    const nominal = bench.trim?.trimmers[which]?.nominalV
    const wanted = trim.exactNodeV[which]
    if (used === null || used === undefined || nominal === undefined || wanted === undefined) return []
    return [{ adjuster: which, share: wanted < nominal ? -used : used }]
  })
}
