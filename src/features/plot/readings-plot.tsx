import { scaleLinear } from 'd3-scale'
import { useId, useState } from 'react'
import { type Box, Hatch, XAxis, YAxis } from '../../ui/plot/axes.tsx'
import { PlotFigure, type PlotTableData } from '../../ui/plot/plot-figure.tsx'
import { codeText, numberText } from '../../ui/plot/plot-numbers.ts'
import { PlotSvg } from '../../ui/plot/plot-svg.tsx'
import { useWalk } from '../../ui/plot/walk-points.ts'
import { type PlotRange, shownUnit } from './plot-data.ts'

type ReadingsPlotProps = {
  code: number
  /** In the order they were read, V. */
  readings: readonly number[]
  range: PlotRange
  /** Change that is allowed over the readings, LSB. */
  allowedLsb: number
  asTable?: boolean | undefined
  onTable?: ((asTable: boolean) => void) | undefined
}

const mean = (values: readonly number[]): number => values.reduce((sum, v) => sum + v, 0) / values.length

/** The straight line through evenly spaced readings, for the eye; the solver's own decides. */
function changeLine(values: readonly number[]): { slope: number; centre: number } {
  const centre = (values.length - 1) / 2
  const level = mean(values)
  let top = 0
  let bottom = 0
  values.forEach((value, i) => {
    top += (i - centre) * (value - level)
    bottom += (i - centre) * (i - centre)
  })
  return { slope: bottom === 0 ? 0 : top / bottom, centre }
}

/** Readings of one code in order, less their mean: a settling output falls or rises along a line. */
export function ReadingsPlot(props: ReadingsPlotProps) {
  const { readings, range, code } = props
  const [unit, setUnit] = useState<'LSB' | 'V'>('LSB')
  const level = mean(readings)
  const away = readings.map((reading) => reading - level)
  const change = changeLine(away).slope * (readings.length - 1)
  const lsb = numberText(change / range.lsbV, 1, true)
  const shown = shownUnit(unit, range, Math.max(...away.map(Math.abs)))
  return (
    <PlotFigure
      title={`Readings in order, code ${codeText(code)}`}
      units={[
        ['LSB', 'LSB'],
        ['V', shownUnit('V', range, Math.max(...away.map(Math.abs))).name],
      ]}
      unit={unit}
      onUnit={(chosen) => setUnit(chosen as 'LSB' | 'V')}
      table={tableOf(readings, away, range)}
      caption={`Dots: the ${readings.length} readings less their mean. Line: straight-line change, ${lsb} LSB over all. Hatched: the change allowed, ${props.allowedLsb} LSB. No error bars: each dot is one reading.`}
      asTable={props.asTable}
      onTable={props.onTable}
    >
      {(width) => <Drawing {...props} away={away} shown={shown} width={width} />}
    </PlotFigure>
  )
}

function tableOf(readings: readonly number[], away: readonly number[], range: PlotRange): PlotTableData {
  return {
    head: ['reading', 'measured\nV', 'less mean\nµV', 'less mean\nLSB'],
    rows: readings.map((reading, i) => [
      String(i + 1),
      numberText(reading, 7),
      numberText((away[i] ?? 0) * 1e6, 1, true),
      numberText((away[i] ?? 0) / range.lsbV, 2, true),
    ]),
    csvHead: ['reading', 'measured_v', 'less_mean_v'],
    csvRows: readings.map((reading, i) => [i + 1, reading, away[i] ?? 0]),
  }
}

type DrawingProps = ReadingsPlotProps & {
  away: readonly number[]
  shown: { name: string; perVolt: number }
  width: number
}

function Drawing({ code, readings, range, allowedLsb, away, shown, width }: DrawingProps) {
  const hatch = useId()
  const stop = useWalk(readings.length)
  const box: Box = { left: 55, right: Math.min(width - 24, 400), top: 30, bottom: 160 }
  const most = Math.max(
    ...away.map((v) => Math.abs(v) * shown.perVolt),
    allowedLsb * range.lsbV * shown.perVolt,
  )
  const x = scaleLinear([0.7, readings.length + 0.3], [box.left, box.right])
  const y = scaleLinear([-1.25 * most, 1.25 * most], [box.bottom, box.top])
  const { slope, centre } = changeLine(away)
  const lineEnd = (i: number) => y(slope * (i - centre) * shown.perVolt)
  const half = (allowedLsb * range.lsbV * shown.perVolt) / 2
  return (
    <PlotSvg width={width} height={196} label={`Readings in order at code ${codeText(code)}.`}>
      <defs>
        <Hatch id={hatch} />
      </defs>
      <YAxis y={y} box={box} unit={shown.name} side="left" grid signed />
      <rect
        x={box.left}
        width={box.right - box.left}
        y={y(half)}
        height={Math.max(1, y(-half) - y(half))}
        fill={`url(#${hatch})`}
      />
      <line x1={box.left} x2={box.right} y1={y(0)} y2={y(0)} stroke="var(--rule)" />
      <line
        x1={x(1)}
        x2={x(readings.length)}
        y1={lineEnd(0)}
        y2={lineEnd(readings.length - 1)}
        stroke="var(--ink)"
        strokeWidth={1.25}
      />
      {away.map((value, i) => (
        <g
          // biome-ignore lint/suspicious/noArrayIndexKey: a reading is its place in the order
          key={i}
          {...stop(i)}
          aria-label={`Reading ${i + 1}: ${numberText(readings[i] ?? 0, 7)} V, ${numberText(value / range.lsbV, 2, true)} LSB from the mean`}
        >
          <rect
            x={x(i + 1) - 12}
            y={y(value * shown.perVolt) - 12}
            width={24}
            height={24}
            fill="transparent"
          />
          <circle cx={x(i + 1)} cy={y(value * shown.perVolt)} r={3} fill="var(--ink)" />
        </g>
      ))}
      <XAxis x={x} box={box} label={`reading at code ${codeText(code)}`} whole />
    </PlotSvg>
  )
}
