import { scaleLinear } from 'd3-scale'
import { type Bars, barsOf } from '../../../shared/solver/lots/histogram.ts'
import { type Box, PlotText } from '../../ui/plot/axes.tsx'
import { PlotFigure } from '../../ui/plot/plot-figure.tsx'
import { decimalsFor, numberText } from '../../ui/plot/plot-numbers.ts'
import { PlotSvg } from '../../ui/plot/plot-svg.tsx'
import { useWalk } from '../../ui/plot/walk-points.ts'
import { RoundAxis } from './round-axis.tsx'

const height = 140

/** Worst errors as left, against the tolerance. */
export function LeftPlot({
  values,
  toleranceLsb,
}: {
  values: readonly number[]
  toleranceLsb: number | null
}) {
  const bars = barsOf(values, 30)
  if (bars === null) return null
  const ends = bars.counts.map(
    (count, i) => [bars.from + i * bars.width, bars.from + (i + 1) * bars.width, count] as const,
  )
  const decimals = decimalsFor(bars.width)
  return (
    <PlotFigure
      title="Worst error as left"
      units={[['LSB', 'LSB']]}
      unit="LSB"
      onUnit={() => undefined}
      table={{
        head: ['from, LSB', 'to, LSB', 'channels'],
        rows: ends.map(([low, high, count]) => [
          numberText(low, decimals),
          numberText(high, decimals),
          numberText(count, 0),
        ]),
        csvHead: ['from_lsb', 'to_lsb', 'channels'],
        csvRows: ends,
      }}
      caption={`${values.length} channels verified, each bar ${numberText(bars.width, decimals)} LSB. No error bars: counts.`}
    >
      {(width) => <Drawing bars={bars} toleranceLsb={toleranceLsb} width={width} />}
    </PlotFigure>
  )
}

function Drawing({ bars, toleranceLsb, width }: { bars: Bars; toleranceLsb: number | null; width: number }) {
  const box: Box = { left: 12, right: width - 16, top: 24, bottom: height - 34 }
  const end = bars.from + bars.counts.length * bars.width
  const x = scaleLinear([0, Math.max(end, (toleranceLsb ?? 0) * 1.15)], [box.left, box.right]).nice(6)
  const y = scaleLinear([0, Math.max(1, ...bars.counts)], [box.bottom, box.top])
  const outline = `M${x(bars.from)} ${y(0)}${bars.counts
    .map((count, i) => `V${y(count)}H${x(bars.from + (i + 1) * bars.width)}`)
    .join('')}V${y(0)}`
  return (
    <PlotSvg width={width} height={height} label="Worst error as left of each verified channel.">
      <path d={outline} fill="var(--shade)" stroke="var(--ink)" strokeWidth={1.25} />
      <line x1={box.left} x2={box.right} y1={box.bottom} y2={box.bottom} stroke="var(--rule)" />
      {toleranceLsb === null ? null : (
        <>
          <line
            x1={x(toleranceLsb)}
            x2={x(toleranceLsb)}
            y1={box.top - 8}
            y2={box.bottom}
            stroke="var(--ink)"
            strokeWidth={1.5}
          />
          <PlotText x={x(toleranceLsb) - 4} y={box.top - 2} anchor="end">
            tolerance
          </PlotText>
        </>
      )}
      <Stops bars={bars} x={x} y={y} box={box} />
      <RoundAxis x={x} box={box} label="worst |error| as left, LSB" />
    </PlotSvg>
  )
}

type Scale = ReturnType<typeof scaleLinear<number, number>>

function Stops({ bars, x, y, box }: { bars: Bars; x: Scale; y: Scale; box: Box }) {
  const stop = useWalk(bars.counts.length)
  const decimals = decimalsFor(bars.width)
  return bars.counts.map((count, i) => {
    const from = bars.from + i * bars.width
    const top = Math.min(y(count), box.bottom - 4)
    return (
      <g
        key={from}
        {...stop(i)}
        aria-label={`${numberText(from, decimals)} to ${numberText(from + bars.width, decimals)} LSB: ${count}.`}
      >
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
