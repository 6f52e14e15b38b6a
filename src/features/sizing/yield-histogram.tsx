import { scaleLinear } from 'd3-scale'
import type { YieldResult } from '../../../shared/solver/yield/types.ts'
import { type Box, PlotText, type Scale } from '../../ui/plot/axes.tsx'
import { decimalsFor, numberText } from '../../ui/plot/plot-numbers.ts'
import { PlotSvg } from '../../ui/plot/plot-svg.tsx'
import { useWalk } from '../../ui/plot/walk-points.ts'
import { type Bar, barSentence, barsOf } from './yield-words.ts'

const height = 140
const text = { fontSize: 11, fontFamily: 'Fira Sans, sans-serif' } as const

/** Stepped outline with soft fill; the median, 99 % and the tolerance marked. */
export function YieldHistogram({ result, width }: { result: YieldResult; width: number }) {
  const { histogram, quantiles } = result.remainingLsb
  const bars = barsOf(histogram)
  const box: Box = { left: 8, right: width - 8, top: 30, bottom: height - 32 }
  const end = histogram.from + histogram.width * histogram.counts.length
  const most = Math.max(1, ...histogram.counts)
  const x = scaleLinear([histogram.from, end], [box.left, box.right])
  const y = scaleLinear([0, most], [box.bottom, box.top])
  const drawn = bars.filter(({ isOver }) => !isOver)
  const outline = `M${x(histogram.from)} ${y(0)}${drawn.map((bar) => `V${y(bar.count)}H${x(bar.to)}`).join('')}V${y(0)}`
  const quantile = (probability: number) =>
    quantiles.find((one) => one.probability === probability)?.lsb ?? null
  const label = `Largest remaining error of ${numberText(result.remainingLsb.units, 0)} units.`
  return (
    <PlotSvg width={width} height={height} label={label}>
      <path d={outline} fill="var(--shade)" stroke="var(--ink)" strokeWidth={1.25} />
      <line x1={box.left} x2={box.right} y1={box.bottom} y2={box.bottom} stroke="var(--rule)" />
      <BarStops bars={bars} x={x} y={y} box={box} />
      <Mark at={quantile(0.5)} word="median" x={x} box={box} />
      <Mark at={quantile(0.99)} word="99 %" x={x} box={box} />
      <Tolerance at={result.toleranceLsb} x={x} box={box} />
      <ErrorTicks x={x} box={box} />
    </PlotSvg>
  )
}

function BarStops({ bars, x, y, box }: { bars: readonly Bar[]; x: Scale; y: Scale; box: Box }) {
  const stop = useWalk(bars.length)
  return bars.map((bar, i) => {
    const left = bar.isOver ? box.right : x(bar.from)
    const right = bar.isOver ? box.right + 6 : x(bar.to)
    const top = bar.isOver ? box.top : Math.min(y(bar.count), box.bottom - 4)
    return (
      <g key={bar.from} {...stop(i)} aria-label={barSentence(bar)}>
        <rect x={left} y={top} width={right - left} height={box.bottom - top} fill="transparent" />
      </g>
    )
  })
}

type MarkProps = { at: number | null; word: string; x: Scale; box: Box }

function Mark({ at, word, x, box }: MarkProps) {
  if (at === null || at > (x.domain()[1] ?? 0)) return null
  return (
    <>
      <line
        x1={x(at)}
        x2={x(at)}
        y1={box.top - 8}
        y2={box.bottom}
        stroke="var(--ink-2)"
        strokeWidth={1.25}
        strokeDasharray="4 3"
      />
      <PlotText x={x(at)} y={box.top - 14} anchor="middle">
        {`${word} ${numberText(at, 2)}`}
      </PlotText>
    </>
  )
}

function Tolerance({ at, x, box }: { at: number; x: Scale; box: Box }) {
  return (
    <>
      <line x1={x(at)} x2={x(at)} y1={box.top - 8} y2={box.bottom} stroke="var(--ink)" strokeWidth={1.5} />
      <PlotText x={x(at) + 4} y={box.top - 2}>
        tolerance
      </PlotText>
    </>
  )
}

function ErrorTicks({ x, box }: { x: Scale; box: Box }) {
  const ticks = x.ticks(6)
  const decimals = Math.max(1, decimalsFor((ticks[1] ?? 1) - (ticks[0] ?? 0)))
  return (
    <g {...text} fill="var(--ink-2)">
      {ticks.map((tick) => (
        <text key={tick} x={x(tick)} y={box.bottom + 14} textAnchor="middle">
          {numberText(tick, decimals)}
        </text>
      ))}
      <text x={box.right} y={box.bottom + 28} textAnchor="end" fill="var(--ink-3)">
        largest remaining |error|, LSB
      </text>
    </g>
  )
}
