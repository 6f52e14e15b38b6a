import { scaleLinear } from 'd3-scale'
import { type Box, ErrorBar, type Scale, YAxis } from '../../ui/plot/axes.tsx'
import { EndLabels } from '../../ui/plot/end-labels.tsx'
import { PlotFigure, type PlotTableData } from '../../ui/plot/plot-figure.tsx'
import { numberText } from '../../ui/plot/plot-numbers.ts'
import { PlotSvg } from '../../ui/plot/plot-svg.tsx'
import { useWalk } from '../../ui/plot/walk-points.ts'
import type { Which } from './analyse.ts'
import { markSentence, StationMark } from './station-mark.tsx'
import type { Comparison, StationLine } from './stations.ts'

const height = 210
const text = { fontSize: 11, fontFamily: 'Fira Sans, sans-serif' } as const

type Props = { comparison: Comparison; which: Which; unit: string }

/** Monthly means of each station less the mean of all. */
export function StationPlot({ comparison, which, unit }: Props) {
  const { lines, by } = comparison
  const from = by === 'reference' ? 'reference units' : 'units as found, from unit to unit'
  return (
    <PlotFigure
      title={`Stations compared, ${which} error less the mean`}
      units={[[unit, unit]]}
      unit={unit}
      onUnit={() => undefined}
      table={tableOf(lines, unit)}
      caption={`By ${from}. ${markSentence(lines.map(({ station }) => station))} Bars: expanded uncertainty of the monthly mean, k = 2; a month with one reading has none.`}
    >
      {(width) => <Drawing lines={lines} unit={unit} width={width} />}
    </PlotFigure>
  )
}

function tableOf(lines: readonly StationLine[], unit: string): PlotTableData {
  const rows = lines.flatMap(({ station, points }) => points.map((point) => ({ station, ...point })))
  const name = unit === 'ppm' ? 'ppm' : 'uv'
  return {
    head: ['station', 'month', 'readings', `less the mean, ${unit}`, `U, ${unit}`],
    rows: rows.map(({ station, month, n, value, bar }) => [
      station,
      month,
      numberText(n, 0),
      numberText(value, 2, true),
      bar === null ? '' : numberText(bar, 2),
    ]),
    csvHead: ['station', 'month', 'readings', `less_mean_${name}`, `u_${name}`],
    csvRows: rows.map(({ station, month, n, value, bar }) => [station, month, n, value, bar]),
  }
}

function Drawing({ lines, unit, width }: { lines: readonly StationLine[]; unit: string; width: number }) {
  const box: Box = { left: 48, right: width - 84, top: 26, bottom: height - 30 }
  const points = lines.flatMap((line) => line.points)
  const ends = points.flatMap(({ value, bar }) => [value - (bar ?? 0), value + (bar ?? 0)])
  const y = scaleLinear([Math.min(0, ...ends), Math.max(0, ...ends)], [box.bottom - 6, box.top]).nice()
  const all = points.map(({ step }) => step)
  const [first, last] = [Math.min(...all), Math.max(...all)]
  const x = scaleLinear(first === last ? [first - 1, last + 1] : [first, last], [
    box.left + 10,
    box.right - 10,
  ])
  const labels = lines.flatMap(({ station, points: own }) => {
    const end = own.at(-1)
    return end ? [{ y: y(end.value), text: station, colour: 'var(--ink)' }] : []
  })
  return (
    <PlotSvg width={width} height={height} label="Monthly means of each station.">
      <YAxis y={y} box={box} unit={unit} side="left" grid signed />
      <line x1={box.left} x2={box.right} y1={y(0)} y2={y(0)} stroke="var(--rule)" />
      <Months lines={lines} x={x} box={box} />
      <Marks lines={lines} x={x} y={y} unit={unit} />
      <EndLabels x={box.right} labels={labels} />
    </PlotSvg>
  )
}

function Marks({ lines, x, y, unit }: { lines: readonly StationLine[]; x: Scale; y: Scale; unit: string }) {
  const stop = useWalk(lines.reduce((sum, { points }) => sum + points.length, 0))
  let index = 0
  return lines.map(({ station, points }, line) => (
    <g key={station}>
      <path
        d={`M${points.map(({ step, value }) => `${x(step)} ${y(value)}`).join('L')}`}
        fill="none"
        stroke="var(--ink)"
        strokeWidth={1.25}
      />
      {points.map(({ month, step, value, bar, n }) => (
        <g
          key={month}
          {...stop(index++)}
          aria-label={`${station}, ${month}: ${numberText(value, 2, true)} ${unit}${bar === null ? '' : `, U ${numberText(bar, 2)}`}, ${n} readings.`}
        >
          <rect x={x(step) - 8} y={y(value) - 12} width={16} height={24} fill="transparent" />
          {bar === null ? null : (
            <ErrorBar x={x(step)} from={y(value - bar)} to={y(value + bar)} colour="var(--ink)" />
          )}
          <StationMark index={line} x={x(step)} y={y(value)} colour="var(--ink)" />
        </g>
      ))}
    </g>
  ))
}

function Months({ lines, x, box }: { lines: readonly StationLine[]; x: Scale; box: Box }) {
  const months = new Map(
    lines.flatMap(({ points }) => points.map(({ step, month }) => [step, month] as const)),
  )
  const sorted = [...months].sort(([a], [b]) => a - b)
  const every = Math.max(1, Math.ceil(sorted.length / Math.max(1, Math.floor((box.right - box.left) / 56))))
  return (
    <g {...text} fill="var(--ink-2)">
      {sorted.map(([step, month], i) =>
        i % every === 0 ? (
          <text key={step} x={x(step)} y={box.bottom + 14} textAnchor="middle">
            {i === 0 || month.endsWith('-01') ? month : month.slice(5)}
          </text>
        ) : null,
      )}
      <text x={box.right} y={box.bottom + 27} textAnchor="end" fill="var(--ink-3)">
        month
      </text>
    </g>
  )
}
