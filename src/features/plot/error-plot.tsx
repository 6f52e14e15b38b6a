import { scaleLinear } from 'd3-scale'
import { useId, useState } from 'react'
import { type Box, ErrorBar, Hatch, PlotText, type Scale, XAxis, YAxis } from '../../ui/plot/axes.tsx'
import { PlotFigure } from '../../ui/plot/plot-figure.tsx'
import { PlotSvg } from '../../ui/plot/plot-svg.tsx'
import { useWalk } from '../../ui/plot/walk-points.ts'
import { barsSentence, pointLabel, pointTable } from './describe-points.ts'
import { LineTakenApart, type OnPlot, Predicted, Reach } from './line-parts.tsx'
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
import { StripMarks } from './residual-strip.tsx'

type ErrorPlotProps = {
  title: string
  range: PlotRange
  points: readonly PlotPoint[]
  line: PlotLine | null
  predicted: PlotLine | null
  /** Every line between the two can be nulled; drawn when a unit is out of reach. */
  reach?: readonly [PlotLine, PlotLine] | null
  /** What the bars are: "expanded uncertainty U, k = 2, of …"; null when there are none. */
  bars: string | null
  method: string
  asTable?: boolean | undefined
  onTable?: ((asTable: boolean) => void) | undefined
}

const markRadius = 3.5

/** Error as found: the points, the line taken apart into offset and gain, what the trim will leave, residuals below. */
export function ErrorPlot(props: ErrorPlotProps) {
  const [unit, setUnit] = useState<'ppm' | 'LSB'>('LSB')
  const { range, points } = props
  return (
    <PlotFigure
      title={props.title}
      units={[
        ['ppm', 'ppm'],
        ['LSB', `LSB, ${shownUnit('V', range, largestOf(props)).name}`],
      ]}
      unit={unit}
      onUnit={(chosen) => setUnit(chosen as 'ppm' | 'LSB')}
      table={pointTable(points, range)}
      caption={captionOf(props)}
      asTable={props.asTable}
      onTable={props.onTable}
    >
      {(width) => <Drawing {...props} unit={unit === 'LSB' ? 'V' : 'ppm'} width={width} />}
    </PlotFigure>
  )
}

function largestOf({ points, line, range, predicted }: ErrorPlotProps): number {
  const ends = [line, predicted].flatMap((one) =>
    one ? [lineAt(one, range.lowV), lineAt(one, fullScaleV(range))] : [],
  )
  return largest([...points.map((point) => point.errorV), ...ends])
}

function captionOf({ points, line, bars, reach, method, range }: ErrorPlotProps): string {
  if (points.length === 0) return 'No points yet.'
  const parts = ['Circles: measured.']
  if (line) parts.push(`Line: ${method}, split into offset (tide) and gain (copper).`)
  if (reach) parts.push('Hatched: every line that can be nulled. The measured line lies outside it.')
  parts.push(barsSentence(points, range, bars, 'circles', smallestBarPx(points, range)))
  if (line) parts.push('Lower strip: residual from the line.')
  return parts.join(' ')
}

/** Pixels that the longest bar takes on the plot as it stands. */
function smallestBarPx(points: readonly PlotPoint[], range: PlotRange): number {
  const spread = Math.max(...points.map((p) => p.errorV), 0) - Math.min(...points.map((p) => p.errorV), 0)
  const longest = largest(points.map((point) => point.barV ?? 0))
  return (longest / Math.max(spread, range.lsbV / 100)) * 190
}

function Drawing(props: ErrorPlotProps & { unit: PlotUnit; width: number }) {
  const { range, points, line, predicted, reach, width, unit } = props
  const hatch = useId()
  const narrow = width < 480
  const isEmpty = points.length === 0
  const box: Box = { left: 55, right: width - (narrow ? 60 : 88), top: 30, bottom: isEmpty ? 180 : 250 }
  const shown = shownUnit(unit, range, largestOf(props))
  const x = scaleLinear([range.lowV, range.highV], [box.left, box.right])
  const y = errorScale(props, shown.perVolt, box)
  const at = (volts: number) => y(volts * shown.perVolt)
  const strip: Box = { ...box, top: box.bottom + 54, bottom: box.bottom + 114 }
  const height = line ? strip.bottom + 12 : box.bottom + 34
  return (
    <PlotSvg width={width} height={height} label={`${props.title}, ${points.length} points.`}>
      <defs>
        <Hatch id={hatch} />
      </defs>
      {reach && <Reach lines={reach} range={range} x={x} at={at} fill={`url(#${hatch})`} />}
      {isEmpty ? <EmptyFrame box={box} /> : <YAxis y={y} box={box} unit={shown.name} side="left" grid />}
      {unit === 'V' && !isEmpty && (
        <YAxis y={inLsb(y, shown.perVolt, range)} box={box} unit="LSB" side="right" />
      )}
      <XAxis x={x} box={box} label="ideal output, V" />
      {!isEmpty && <line x1={box.left} x2={box.right} y1={at(0)} y2={at(0)} stroke="var(--rule)" />}
      {predicted && <Predicted line={predicted} range={range} x={x} at={at} box={box} />}
      {line && <LineTakenApart line={line} range={range} x={x} at={at} />}
      <Marks points={points} range={range} x={x} at={at} />
      {line && <StripMarks points={points} range={range} box={strip} x={x} />}
    </PlotSvg>
  )
}

function errorScale(props: ErrorPlotProps, perVolt: number, box: Box): Scale {
  const { points, line, predicted, reach, range } = props
  const ends = [line, predicted, ...(reach ?? [])].flatMap((one) =>
    one ? [lineAt(one, range.lowV), lineAt(one, fullScaleV(range))] : [],
  )
  const values = [
    0,
    ...ends,
    ...points.flatMap((p) => [p.errorV - (p.barV ?? 0), p.errorV + (p.barV ?? 0)]),
  ].map((volts) => volts * perVolt)
  const low = Math.min(...values)
  const high = Math.max(...values)
  const room = (high - low) * 0.08 || 1
  return scaleLinear([low < 0 ? low - room : low - room / 2, high + room], [box.bottom, box.top])
}

function inLsb(y: Scale, perVolt: number, range: PlotRange): Scale {
  const toLsb = 1 / perVolt / range.lsbV
  return scaleLinear(
    y.domain().map((value) => value * toLsb),
    y.range(),
  )
}

function EmptyFrame({ box }: { box: Box }) {
  const middle = (box.top + box.bottom) / 2
  return (
    <g>
      <rect
        x={box.left}
        y={box.top}
        width={box.right - box.left}
        height={box.bottom - box.top}
        fill="none"
        stroke="var(--hair)"
      />
      <line x1={box.left} x2={box.right} y1={middle} y2={middle} stroke="var(--rule)" />
      <PlotText x={box.left - 8} y={middle + 4} anchor="end" colour="var(--ink-2)">
        0
      </PlotText>
      <PlotText x={(box.left + box.right) / 2} y={middle - 14} anchor="middle">
        no points yet
      </PlotText>
    </g>
  )
}

type MarksProps = OnPlot & { points: readonly PlotPoint[] }

/** Measured points as open circles with their bars: the places that arrow keys walk. */
function Marks({ points, range, x, at }: MarksProps) {
  const stop = useWalk(points.length)
  return points.map((point, index) => {
    const [cx, cy] = [x(point.idealV), at(point.errorV)]
    return (
      <g
        // biome-ignore lint/suspicious/noArrayIndexKey: replicates share their code
        key={index}
        {...stop(index)}
        aria-label={pointLabel(point, range)}
      >
        <rect x={cx - 12} y={cy - 12} width={24} height={24} fill="transparent" />
        {point.barV !== null && (
          <ErrorBar
            x={cx}
            from={at(point.errorV - point.barV)}
            to={at(point.errorV + point.barV)}
            colour="var(--ink)"
          />
        )}
        <circle cx={cx} cy={cy} r={markRadius} fill="var(--paper)" stroke="var(--ink)" strokeWidth={1.5} />
      </g>
    )
  })
}
