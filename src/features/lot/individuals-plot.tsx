import { scaleLinear } from 'd3-scale'
import { type ReactNode, useState } from 'react'
import { type Box, PlotText, type Scale, YAxis } from '../../ui/plot/axes.tsx'
import { EndLabels } from '../../ui/plot/end-labels.tsx'
import { PlotFigure, type PlotTableData } from '../../ui/plot/plot-figure.tsx'
import { numberText } from '../../ui/plot/plot-numbers.ts'
import { PlotSvg } from '../../ui/plot/plot-svg.tsx'
import { useWalk } from '../../ui/plot/walk-points.ts'
import type { LotPoint, Side } from './analyse.ts'
import { PointPages, pageOf, pageSize } from './point-pages.tsx'
import { RoundAxis } from './round-axis.tsx'
import { markSentence, StationMark } from './station-mark.tsx'

/** Under this many units the limits say little (patterns.md). */
const leastForLimits = 20
const height = 246
const colours = { gain: 'var(--copper)', offset: 'var(--tide)', left: 'var(--ink)' } as const
const words = {
  gain: 'gain error as found',
  offset: 'offset error as found',
  left: 'worst error as left',
} as const

/** What the chart is of: an error as found, or, of the channels that were verified, the worst error as left. */
export type Series = {
  which: keyof typeof words
  unit: Side['unit'] | 'LSB'
  chart: Side['chart']
}
const decimalsOf = (unit: Series['unit']): number => (unit === 'LSB' ? 2 : 1)
type Charted = LotPoint & { value: number }

type Props = {
  side: Series
  points: readonly LotPoint[]
  stations: readonly string[]
  /** Gain and offset, where the design has both, and as left. */
  choices: readonly (readonly [string, string])[]
  onChoice: (which: string) => void
}

/** Every channel as found in the order of reading, with mean ± 2.66 times the mean moving range. */
export function IndividualsPlot({ side, points: all, stations, choices, onChoice }: Props) {
  const { which, unit, chart } = side
  const points = all.flatMap((point): Charted[] => {
    const value = point[which]
    return value === null ? [] : [{ ...point, value }]
  })
  const [page, setPage] = useState<number | null>(null)
  const pages = Math.max(1, Math.ceil(points.length / pageSize))
  // The newest unless somebody looks at others.
  const at = Math.min(page ?? pages - 1, pages - 1)
  const shown = pageOf(points, at)
  const inReach = points.filter(({ isOut }) => !isOut).length
  const hasLimits = chart !== null && inReach >= leastForLimits
  const few = `Limits of the chart need ${leastForLimits} channels; ${inReach} are here. `
  const limits = hasLimits
    ? `Dashed: mean ± 2.66 times the mean moving range (${numberText(chart.meanMovingRange, decimalsOf(unit))} ${unit}). Ringed: outside the limits. `
    : few
  return (
    <PlotFigure
      title={`Individuals chart, ${words[which]}`}
      units={choices}
      unit={which}
      onUnit={onChoice}
      table={tableOf(shown, side)}
      caption={`${markSentence(stations)} ${limits}No error bars: one fit each.`}
      side={<PointPages page={at} pages={pages} count={points.length} onPage={setPage} />}
    >
      {(width) => (
        <Scroller>
          <Drawing
            side={side}
            points={shown}
            first={at * pageSize + 1}
            stations={stations}
            hasLimits={hasLimits}
            width={Math.max(width, 110 + shown.length * (width < 600 ? 9 : 3))}
          />
        </Scroller>
      )}
    </PlotFigure>
  )
}

/** A phone draws the chart at full scale and scrolls it within itself. */
function Scroller({ children }: { children: ReactNode }) {
  return <div className="overflow-x-auto print:overflow-visible">{children}</div>
}

function tableOf(points: readonly Charted[], { which, unit }: Series): PlotTableData {
  const name = unit === 'µV' ? 'uv' : unit.toLowerCase()
  return {
    head: ['unit', 'channel', 'station', `${words[which]}, ${unit}`, 'verdict'],
    rows: points.map((point) => [
      point.unit,
      point.channel,
      point.station,
      numberText(point.value, 2, which !== 'left'),
      point.isOut ? 'out of reach' : '',
    ]),
    csvHead: ['unit', 'channel', 'station', 'read_at', `${which}_error_${name}`, 'out_of_reach'],
    csvRows: points.map((point) => [
      point.unit,
      point.channel,
      point.station,
      new Date(point.at).toISOString(),
      point.value,
      point.isOut ? 1 : 0,
    ]),
  }
}

type DrawingProps = {
  side: Series
  points: readonly Charted[]
  first: number
  stations: readonly string[]
  hasLimits: boolean
  width: number
}

function Drawing({ side, points, first, stations, hasLimits, width }: DrawingProps) {
  const { which, unit, chart } = side
  const box: Box = { left: 56, right: width - 100, top: 26, bottom: height - 34 }
  const inReach = points.filter(({ isOut }) => !isOut)
  const drawn = inReach.length > 0 ? inReach : points
  const values = drawn.map((point) => point.value)
  const ends = hasLimits && chart ? [...values, chart.lower, chart.upper] : values
  const y = scaleLinear([Math.min(...ends), Math.max(...ends)], [box.bottom - 12, box.top]).nice()
  const x = scaleLinear([first, first + Math.max(1, points.length - 1)], [box.left + 8, box.right - 8])
  const line = points
    .flatMap((point, i) =>
      drawn.includes(point) || !point.isOut ? [`${x(first + i)} ${y(point.value)}`] : [],
    )
    .join('L')
  return (
    <PlotSvg
      width={width}
      height={height}
      label={`${words[which]} of ${points.length} channels in the order of reading.`}
    >
      <YAxis y={y} box={box} unit={unit} side="left" grid />
      {chart ? <Limits side={side} y={y} box={box} hasLimits={hasLimits} /> : null}
      {line === '' ? null : <path d={`M${line}`} fill="none" stroke="var(--rule)" strokeWidth={0.75} />}
      <Points
        side={side}
        points={points}
        first={first}
        x={x}
        y={y}
        box={box}
        stations={stations}
        hasLimits={hasLimits}
      />
      <RoundAxis x={x} box={box} label="channel, in order of reading" whole />
    </PlotSvg>
  )
}

type LimitsProps = { side: Series; y: Scale; box: Box; hasLimits: boolean }

function Limits({ side: { chart, which, unit }, y, box, hasLimits }: LimitsProps) {
  if (!chart) return null
  const at = (value: number, word: string) => ({
    y: y(value),
    text: `${word} ${numberText(value, decimalsOf(unit), which !== 'left')}`,
    colour: word === 'mean' ? colours[which] : 'var(--ink-2)',
  })
  const labels = [
    at(chart.mean, 'mean'),
    ...(hasLimits ? [at(chart.upper, 'upper'), at(chart.lower, 'lower')] : []),
  ]
  return (
    <>
      <line x1={box.left} x2={box.right} y1={y(chart.mean)} y2={y(chart.mean)} stroke="var(--ink)" />
      {hasLimits
        ? [chart.upper, chart.lower].map((value) => (
            <line
              key={value}
              x1={box.left}
              x2={box.right}
              y1={y(value)}
              y2={y(value)}
              stroke="var(--ink-2)"
              strokeWidth={1.25}
              strokeDasharray="5 4"
            />
          ))
        : null}
      <EndLabels x={box.right + 6} labels={labels} />
    </>
  )
}

type PointsProps = Omit<DrawingProps, 'width'> & { x: Scale; y: Scale; box: Box }

function Points({ side, points, first, x, y, box, stations, hasLimits }: PointsProps) {
  const { which, unit, chart } = side
  const stop = useWalk(points.length)
  const [low = 0, high = 1] = y.domain()
  return points.map((point, i) => {
    const { value } = point
    const isBeyond = value < low || value > high
    const isOutside = hasLimits && chart !== null && (value > chart.upper || value < chart.lower)
    const px = x(first + i)
    const py = isBeyond ? (value < low ? box.bottom - 4 : box.top + 4) : y(value)
    const label = `Unit ${point.unit}, channel ${point.channel}, ${point.station}: ${numberText(value, 2, true)} ${unit}${point.isOut ? ', out of reach, not in the limits' : isOutside ? ', outside the limits' : ''}.`
    return (
      <g key={`${point.record}`} {...stop(i)} aria-label={label}>
        <rect x={px - 5} y={py - 8} width={10} height={16} fill="transparent" />
        {isBeyond ? (
          <Beyond
            x={px}
            y={py}
            isLow={value < low}
            text={point.isOut ? `${point.unit} at ${numberText(value, 0)}` : ''}
          />
        ) : (
          <StationMark index={stations.indexOf(point.station)} x={px} y={py} colour={colours[which]} />
        )}
        {isOutside && !isBeyond ? <circle cx={px} cy={py} r={7} fill="none" stroke="var(--ink)" /> : null}
      </g>
    )
  })
}

/** A point that the scale leaves out: an arrow at the edge. */
function Beyond({ x, y, isLow, text }: { x: number; y: number; isLow: boolean; text: string }) {
  const way = isLow ? 1 : -1
  return (
    <>
      <path
        d={`M${x} ${y - 8 * way}V${y}M${x - 3} ${y - 4 * way}L${x} ${y}L${x + 3} ${y - 4 * way}`}
        fill="none"
        stroke="var(--bad)"
        strokeWidth={1.5}
      />
      {text === '' ? null : (
        <PlotText x={x + 6} y={y} colour="var(--bad)">
          {text}
        </PlotText>
      )}
    </>
  )
}
