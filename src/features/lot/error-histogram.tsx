import { scaleLinear } from 'd3-scale'
import { type Bars, barsOf } from '../../../shared/solver/lots/histogram.ts'
import { type Box, PlotText, type Scale } from '../../ui/plot/axes.tsx'
import { PlotFigure, type PlotTableData } from '../../ui/plot/plot-figure.tsx'
import { decimalsFor, numberText } from '../../ui/plot/plot-numbers.ts'
import { PlotSvg } from '../../ui/plot/plot-svg.tsx'
import { useWalk } from '../../ui/plot/walk-points.ts'
import type { LotPoint, Side } from './analyse.ts'
import { RoundAxis } from './round-axis.tsx'

const looks = {
  gain: { line: 'var(--copper)', fill: 'var(--copper-soft)' },
  offset: { line: 'var(--tide)', fill: 'var(--tide-soft)' },
} as const
const most = 30
const height = 216

/** As-found errors under two brackets: what the adjuster reaches, and what the released budget demands. */
export function ErrorHistogram({ side, points }: { side: Side; points: readonly LotPoint[] }) {
  const { which, unit } = side
  const values = points.map((point) => point[which])
  const bars = barsOf(values, most)
  const title = `${which === 'gain' ? 'Gain' : 'Offset'} error against reach`
  if (bars === null) return null
  const width = numberText(bars.width, decimalsFor(bars.width))
  return (
    <PlotFigure
      title={title}
      units={[[unit, unit]]}
      unit={unit}
      onUnit={() => undefined}
      table={tableOf(bars, unit)}
      caption={`${values.length} channels as found, each bar ${width} ${unit}. Brackets: what the adjuster reaches, and what the released budget demands. No error bars: counts.`}
    >
      {(room) => <Drawing side={side} bars={bars} width={room} title={title} />}
    </PlotFigure>
  )
}

function tableOf({ from, width, counts }: Bars, unit: string): PlotTableData {
  const ends = counts.map((count, i) => [from + i * width, from + (i + 1) * width, count] as const)
  const decimals = decimalsFor(width)
  const name = unit === 'ppm' ? 'ppm' : 'uv'
  return {
    head: [`from, ${unit}`, `to, ${unit}`, 'channels'],
    rows: ends.map(([low, high, count]) => [
      numberText(low, decimals, true),
      numberText(high, decimals, true),
      numberText(count, 0),
    ]),
    csvHead: [`from_${name}`, `to_${name}`, 'channels'],
    csvRows: ends,
  }
}

type DrawingProps = { side: Side; bars: Bars; width: number; title: string }

function Drawing({ side, bars, width, title }: DrawingProps) {
  const box: Box = { left: 20, right: width - 20, top: 70, bottom: height - 34 }
  const x = scaleLinear(domainOf(side, bars), [box.left, box.right])
  const y = scaleLinear([0, Math.max(1, ...bars.counts)], [box.bottom, box.top])
  const { line, fill } = looks[side.which]
  const outline = `M${x(bars.from)} ${y(0)}${bars.counts
    .map((count, i) => `V${y(count)}H${x(bars.from + (i + 1) * bars.width)}`)
    .join('')}V${y(0)}`
  return (
    <PlotSvg width={width} height={height} label={`${title}. ${spoken(side)}`}>
      <path d={outline} fill={fill} stroke={line} strokeWidth={1.25} />
      <line x1={box.left} x2={box.right} y1={box.bottom} y2={box.bottom} stroke={line} />
      <Bracket limits={side.reach} at={18} x={x} box={box} colour={line} word="reach" unit={side.unit} />
      {side.demand ? (
        <Bracket
          limits={side.demand}
          at={40}
          x={x}
          box={box}
          colour="var(--ink)"
          word="budget demands"
          unit={side.unit}
        />
      ) : null}
      <BarStops bars={bars} x={x} y={y} box={box} unit={side.unit} />
      <Mean side={side} x={x} box={box} />
      <RoundAxis x={x} box={box} label={`${side.which} error as found, ${side.unit}`} />
    </PlotSvg>
  )
}

/** The data, and each bracket unless it would leave the data a sliver. */
function domainOf({ reach, demand }: Side, bars: Bars): [number, number] {
  const data = { low: bars.from, high: bars.from + bars.counts.length * bars.width }
  const size = Math.max(Math.abs(data.low), Math.abs(data.high), data.high - data.low)
  let { low, high } = data
  for (const limits of [demand, reach]) {
    if (limits === null || Math.max(-limits.low, limits.high) > 6 * size) continue
    low = Math.min(low, limits.low)
    high = Math.max(high, limits.high)
  }
  const room = 0.04 * (high - low)
  return [low - room, high + room]
}

const spoken = ({ spread, unit, reach }: Side): string =>
  `${spread ? `Mean ${numberText(spread.mean, 1, true)} ${unit}. ` : ''}Reach ${numberText(reach.low, 1, true)} to ${numberText(reach.high, 1, true)} ${unit}.`

type BracketProps = {
  limits: { low: number; high: number }
  at: number
  x: Scale
  box: Box
  colour: string
  word: string
  unit: string
}

/** Ends that lie in the plot have serifs; an end beyond it has an arrow. */
function Bracket({ limits, at, x, box, colour, word, unit }: BracketProps) {
  const [from = 0, to = 1] = x.domain()
  const low = Math.max(limits.low, from)
  const high = Math.min(limits.high, to)
  if (!(low < high)) return null
  const end = (isIn: boolean, place: number, way: number) =>
    isIn ? `M${place} ${at}v7` : `M${place - 6 * way} ${at - 4}L${place} ${at}L${place - 6 * way} ${at + 4}`
  const isOut = limits.low < from || limits.high > to
  const path = `M${x(low)} ${at}H${x(high)}${end(limits.low >= from, x(low), -1)}${end(limits.high <= to, x(high), 1)}`
  return (
    <>
      <path d={path} fill="none" stroke={colour} strokeWidth={1.5} />
      <PlotText x={Math.min(x(high), box.right)} y={at - 5} anchor="end" colour={colour}>
        {`${word} ${limitsText(limits, unit)}${isOut ? ', outside this plot' : ''}`}
      </PlotText>
    </>
  )
}

function limitsText({ low, high }: { low: number; high: number }, unit: string): string {
  const size = Math.max(Math.abs(low), Math.abs(high))
  // Millivolts where microvolts would run to five digits.
  const [shown, word] = unit === 'µV' && size >= 10_000 ? [1e-3, 'mV'] : [1, unit]
  const decimals = size * shown >= 100 ? 0 : 1
  return Math.abs(low + high) < 0.01 * size
    ? `±${numberText(size * shown, decimals)} ${word}`
    : `${numberText(low * shown, decimals, true)} to ${numberText(high * shown, decimals, true)} ${word}`
}

function Mean({ side, x, box }: { side: Side; x: Scale; box: Box }) {
  const { spread } = side
  if (spread === null) return null
  const at = x(spread.mean)
  const isRight = at > (box.left + box.right) / 2
  const text = `mean ${numberText(spread.mean, 1, true)}${spread.s === null ? '' : `, s ${numberText(spread.s, 1)}`}`
  return (
    <>
      <line x1={at} x2={at} y1={box.top - 8} y2={box.bottom} stroke="var(--ink)" strokeWidth={1.25} />
      <PlotText x={at + (isRight ? -6 : 6)} y={box.top - 2} anchor={isRight ? 'end' : 'start'}>
        {text}
      </PlotText>
    </>
  )
}

type StopProps = { bars: Bars; x: Scale; y: Scale; box: Box; unit: string }

function BarStops({ bars, x, y, box, unit }: StopProps) {
  const stop = useWalk(bars.counts.length)
  const decimals = decimalsFor(bars.width)
  return bars.counts.map((count, i) => {
    const from = bars.from + i * bars.width
    const top = Math.min(y(count), box.bottom - 4)
    const label = `${numberText(from, decimals, true)} to ${numberText(from + bars.width, decimals, true)} ${unit}: ${count}.`
    return (
      <g key={from} {...stop(i)} aria-label={label}>
        <rect
          x={x(from)}
          y={top}
          width={Math.max(1, x(from + bars.width) - x(from))}
          height={box.bottom - top}
          fill="transparent"
        />
      </g>
    )
  })
}
