import { scaleLinear } from 'd3-scale'
import { type Box, PlotText, type Scale, XAxis, YAxis } from '../../ui/plot/axes.tsx'
import { PlotFigure } from '../../ui/plot/plot-figure.tsx'
import { numberText } from '../../ui/plot/plot-numbers.ts'
import { PlotSvg } from '../../ui/plot/plot-svg.tsx'
import { type PointStop, useWalk } from '../../ui/plot/walk-points.ts'
import { pointLabel, pointTable } from './describe-points.ts'
import { largest, type PlotPoint, type PlotRange } from './plot-data.ts'

type StripProps = { points: readonly PlotPoint[]; range: PlotRange; box: Box; x: Scale }

/** Residuals from the line in LSB, each with its value; they are a hundred times smaller than the errors. */
export function StripMarks({
  points,
  range,
  box,
  x,
  stop,
}: StripProps & { stop?: (index: number) => PointStop }) {
  const most = largest(points.map((p) => p.residualV / range.lsbV))
  const y = scaleLinear([-1.3 * Math.max(most, 0.4), 1.3 * Math.max(most, 0.4)], [box.bottom, box.top])
  return (
    <g>
      <YAxis y={y} box={box} unit="LSB" side="left" grid />
      <line x1={box.right} x2={box.right} y1={box.top} y2={box.bottom} stroke="var(--rule)" />
      <line x1={box.left} x2={box.right} y1={y(0)} y2={y(0)} stroke="var(--rule)" />
      {points.map((point, index) => {
        const lsb = point.residualV / range.lsbV
        const atEnd = x(point.idealV) > box.right - 40
        const beside = point.flagged ? 14 : 8
        // The last label stands on the side of the one before it: a line further out where the two would meet.
        const before = points[index - 1]
        const isTight = atEnd && before !== undefined && x(point.idealV) - x(before.idealV) < 84
        const out = isTight ? 11 : 0
        return (
          <g
            // biome-ignore lint/suspicious/noArrayIndexKey: replicates share their code
            key={index}
            {...(stop ? { ...stop(index), 'aria-label': pointLabel(point, range) } : {})}
            fill="var(--ink)"
          >
            {stop && (
              <rect x={x(point.idealV) - 12} y={y(lsb) - 12} width={24} height={24} fill="transparent" />
            )}
            <line
              x1={x(point.idealV)}
              x2={x(point.idealV)}
              y1={y(0)}
              y2={y(lsb)}
              stroke="var(--ink)"
              strokeWidth={1.25}
            />
            <circle cx={x(point.idealV)} cy={y(lsb)} r={3} />
            {point.flagged && (
              <path
                d={`M${x(point.idealV)} ${y(lsb) - 9}l9 9l-9 9l-9 -9Z`}
                fill="none"
                stroke="var(--suspect)"
                strokeWidth={1.5}
              />
            )}
            <PlotText
              x={x(point.idealV) + (atEnd ? -beside : beside)}
              y={y(lsb) + (lsb < 0 ? 10 + out : -1 - out)}
              anchor={atEnd ? 'end' : 'start'}
              colour="var(--ink-2)"
            >
              {numberText(lsb, 2, true)}
            </PlotText>
          </g>
        )
      })}
    </g>
  )
}

type ResidualStripProps = {
  title: string
  points: readonly PlotPoint[]
  range: PlotRange
  caption: string
  asTable?: boolean | undefined
  onTable?: ((asTable: boolean) => void) | undefined
}

/** Residuals from the line as a plot of their own, for when a point is in doubt. */
export function ResidualStrip({ title, points, range, caption, asTable, onTable }: ResidualStripProps) {
  const stop = useWalk(points.length)
  return (
    <PlotFigure
      title={title}
      units={[['LSB', 'LSB']]}
      unit="LSB"
      onUnit={() => undefined}
      table={pointTable(points, range)}
      caption={caption}
      asTable={asTable}
      onTable={onTable}
    >
      {(width) => {
        const box: Box = { left: 55, right: width - (width < 480 ? 24 : 88), top: 30, bottom: 146 }
        const x = scaleLinear([range.lowV, range.highV], [box.left, box.right])
        return (
          <PlotSvg width={width} height={184} label={`${title}, ${points.length} points.`}>
            <StripMarks points={points} range={range} box={box} x={x} stop={stop} />
            <XAxis x={x} box={box} label="ideal output, V" />
          </PlotSvg>
        )
      }}
    </PlotFigure>
  )
}
