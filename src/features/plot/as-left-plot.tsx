import { scaleLinear } from 'd3-scale'
import { useId, useState } from 'react'
import { type Box, ErrorBar, Hatch, PlotText, type Scale, XAxis, YAxis } from '../../ui/plot/axes.tsx'
import { type EndLabel, EndLabels } from '../../ui/plot/end-labels.tsx'
import { PlotFigure } from '../../ui/plot/plot-figure.tsx'
import { PlotSvg } from '../../ui/plot/plot-svg.tsx'
import { useWalk } from '../../ui/plot/walk-points.ts'
import { barsSentence, pointLabel, pointTable } from './describe-points.ts'
import { GuardBand } from './guard-band.tsx'
import {
  fullScaleV,
  largest,
  lineAt,
  type PlotLine,
  type PlotPoint,
  type PlotRange,
  type PlotUnit,
  shownUnit,
} from './plot-data.ts'

/** One pass as drawn: filled dots for the latest, open circles for the one before. */
export type PlotPass = { label: string; points: readonly PlotPoint[]; line: PlotLine | null }

type AsLeftPlotProps = {
  title: string
  range: PlotRange
  latest: PlotPass | null
  earlier: PlotPass | null
  predicted: PlotLine | null
  toleranceV: number | null
  /** Guarded rule: the tolerance less U is hatched. */
  isGuarded: boolean
  bars: string | null
  asTable?: boolean | undefined
  onTable?: ((asTable: boolean) => void) | undefined
}

/** Error as left against tolerance and guard band; an earlier pass stays, open. */
export function AsLeftPlot(props: AsLeftPlotProps) {
  const [unit, setUnit] = useState<PlotUnit>('LSB')
  const volts = shownUnit('V', props.range, largestOf(props)).name
  return (
    <PlotFigure
      title={props.title}
      units={[
        ['LSB', 'LSB'],
        ['ppm', 'ppm'],
        ['V', volts],
      ]}
      unit={unit}
      onUnit={(chosen) => setUnit(chosen as PlotUnit)}
      table={pointTable(props.latest?.points ?? [], props.range)}
      caption={captionOf(props)}
      asTable={props.asTable}
      onTable={props.onTable}
    >
      {(width) => <Drawing {...props} unit={unit} width={width} />}
    </PlotFigure>
  )
}

function captionOf({
  latest,
  earlier,
  bars,
  isGuarded,
  predicted,
  toleranceV,
  range,
}: AsLeftPlotProps): string {
  const parts = latest ? [`Dots: ${latest.label}.`] : ['Not measured yet.']
  if (earlier) parts.push(`Open: ${earlier.label}.`)
  if (predicted) parts.push('Dashed: predicted after loading the codes.')
  if (latest) parts.push(barsSentence(latest.points, range, bars, 'dots', 4))
  if (toleranceV !== null && isGuarded && latest) parts.push('Hatched: guard band, tolerance less U.')
  if (toleranceV === null) parts.push('The design states no tolerance.')
  return parts.join(' ')
}

function largestOf({ latest, earlier, toleranceV, predicted, range }: AsLeftPlotProps): number {
  const passes = [latest, earlier].flatMap((pass) => (pass ? pass.points : []))
  const ends = predicted ? [lineAt(predicted, range.lowV), lineAt(predicted, fullScaleV(range))] : []
  return largest([...passes.map((p) => Math.abs(p.errorV) + (p.barV ?? 0)), ...ends, toleranceV ?? 0])
}

function Drawing(props: AsLeftPlotProps & { unit: PlotUnit; width: number }) {
  const { range, latest, earlier, predicted, toleranceV, isGuarded, width, unit } = props
  const hatch = useId()
  const shown = shownUnit(unit, range, largestOf(props))
  const box: Box = { left: 44, right: width - (width < 480 ? 76 : 104), top: 30, bottom: 290 }
  const most = (largestOf(props) || range.lsbV) * shown.perVolt * 1.2
  const x = scaleLinear([range.lowV, range.highV], [box.left, box.right])
  const y = scaleLinear([-most, most], [box.bottom, box.top])
  const at = (volts: number) => y(volts * shown.perVolt)
  const isEmpty = !latest && !earlier
  return (
    <PlotSvg
      width={width}
      height={box.bottom + 34}
      label={`${props.title}, ${latest?.points.length ?? 0} points.`}
    >
      <defs>
        <Hatch id={hatch} />
      </defs>
      <YAxis y={y} box={box} unit={shown.name} side="left" grid />
      <XAxis x={x} box={box} label="ideal output, V" />
      <line x1={box.left} x2={box.right} y1={y(0)} y2={y(0)} stroke="var(--rule)" />
      {toleranceV !== null && (
        <GuardBand
          toleranceV={toleranceV}
          points={isGuarded ? (latest?.points ?? []) : []}
          x={x}
          at={at}
          box={box}
          fill={`url(#${hatch})`}
        />
      )}
      {isEmpty && !predicted && (
        <PlotText x={(box.left + box.right) / 2} y={y(0) - 14} anchor="middle">
          not measured yet
        </PlotText>
      )}
      {predicted && <Line line={predicted} range={range} x={x} at={at} dash="6 4" />}
      {earlier && <Pass pass={earlier} isOpen range={range} x={x} at={at} />}
      {latest && <Pass pass={latest} isOpen={false} range={range} x={x} at={at} />}
      <EndLabels x={box.right + 10} labels={labelsOf(props, at)} />
    </PlotSvg>
  )
}

/** What stands at the right end of the lines. */
function labelsOf(props: AsLeftPlotProps, at: (volts: number) => number): EndLabel[] {
  const { latest, earlier, predicted, toleranceV, isGuarded, range } = props
  const end = fullScaleV(range)
  const labels: EndLabel[] = []
  const ofLine = (line: PlotLine | null | undefined, text: string, colour = 'var(--ink)') => {
    if (line) labels.push({ y: at(lineAt(line, end)), text, colour })
  }
  if (toleranceV !== null) {
    labels.push({ y: at(toleranceV), text: 'tolerance', colour: 'var(--ink)' })
    labels.push({ y: at(-toleranceV), text: 'tolerance', colour: 'var(--ink)' })
    const bar = latest?.points.at(-1)?.barV ?? null
    if (isGuarded && bar !== null) {
      labels.push({ y: at(bar - toleranceV), text: 'less U', colour: 'var(--ink-2)' })
    }
  }
  ofLine(earlier?.line, earlier?.label ?? '', 'var(--ink-3)')
  ofLine(latest?.line, latest?.label ?? '')
  ofLine(predicted, 'predicted')
  return labels
}

type OnPlot = { range: PlotRange; x: Scale; at: (volts: number) => number }

function Line(props: OnPlot & { line: PlotLine; dash?: string; colour?: string }) {
  const { line, range, x, at } = props
  const end = fullScaleV(range)
  const colour = props.colour ?? 'var(--ink)'
  return (
    <g>
      <line
        x1={x(range.lowV)}
        x2={x(end)}
        y1={at(lineAt(line, range.lowV))}
        y2={at(lineAt(line, end))}
        stroke={colour}
        strokeWidth={1.5}
        {...(props.dash ? { strokeDasharray: props.dash } : {})}
      />
    </g>
  )
}

/** Points of a pass, set apart sideways from the other pass so that their bars do not hide one another. */
function Pass({ pass, isOpen, range, x, at }: OnPlot & { pass: PlotPass; isOpen: boolean }) {
  const stop = useWalk(pass.points.length)
  const colour = isOpen ? 'var(--ink-3)' : 'var(--ink)'
  return (
    <g>
      {pass.line && (
        <Line
          line={pass.line}
          range={range}
          x={x}
          at={at}
          colour={colour}
          {...(isOpen ? { dash: '2 3' } : {})}
        />
      )}
      {pass.points.map((point, index) => {
        const [cx, cy] = [x(point.idealV) + (isOpen ? -4 : 3), at(point.errorV)]
        return (
          <g
            // biome-ignore lint/suspicious/noArrayIndexKey: replicates share their code
            key={index}
            {...stop(index)}
            aria-label={`${pass.label}. ${pointLabel(point, range)}`}
          >
            <rect x={cx - 12} y={cy - 12} width={24} height={24} fill="transparent" />
            {point.barV !== null && (
              <ErrorBar
                x={cx}
                from={at(point.errorV - point.barV)}
                to={at(point.errorV + point.barV)}
                colour={colour}
              />
            )}
            <circle
              cx={cx}
              cy={cy}
              r={3}
              fill={isOpen ? 'var(--paper)' : colour}
              stroke={colour}
              strokeWidth={1.25}
            />
          </g>
        )
      })}
    </g>
  )
}
