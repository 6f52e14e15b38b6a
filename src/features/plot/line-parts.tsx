import { type Box, PlotText, type Scale } from '../../ui/plot/axes.tsx'
import { labelDecimals, numberText } from '../../ui/plot/plot-numbers.ts'
import { fullScaleV, lineAt, type PlotLine, type PlotRange } from './plot-data.ts'

export type OnPlot = { range: PlotRange; x: Scale; at: (volts: number) => number }

/** Hatched: every line between the two that the adjusters can reach. */
export function Reach({
  lines,
  range,
  x,
  at,
  fill,
}: OnPlot & { lines: readonly [PlotLine, PlotLine]; fill: string }) {
  const end = fullScaleV(range)
  const [a, b] = lines
  const upper = Math.max(lineAt(a, end), lineAt(b, end))
  const corner = (line: PlotLine, volts: number) => `${x(volts)} ${at(lineAt(line, volts))}`
  return (
    <g>
      <path
        d={`M${corner(a, range.lowV)}L${corner(a, end)}L${corner(b, end)}L${corner(b, range.lowV)}Z`}
        fill={fill}
        stroke="var(--rule)"
      />
      <PlotText x={x(end) - 8} y={at(upper / 2) + 4} anchor="end">
        within reach
      </PlotText>
    </g>
  )
}

/** The line that the trim will leave, dashed. */
export function Predicted({ line, range, x, at, box }: OnPlot & { line: PlotLine; box: Box }) {
  const end = fullScaleV(range)
  return (
    <g>
      <line
        x1={x(range.lowV)}
        x2={x(end)}
        y1={at(lineAt(line, range.lowV))}
        y2={at(lineAt(line, end))}
        stroke="var(--ink)"
        strokeWidth={1.5}
        strokeDasharray="6 4"
      />
      <PlotText x={(box.left + box.right) / 2} y={at(lineAt(line, (range.lowV + end) / 2)) - 6}>
        predicted after trim
      </PlotText>
    </g>
  )
}

/** The fitted line, a tide bar at the offset point, and a copper bar from the offset to the line at full scale. */
export function LineTakenApart({ line, range, x, at }: OnPlot & { line: PlotLine }) {
  const end = fullScaleV(range)
  const atEnd = lineAt(line, end)
  const micro = line.offsetV * 1e6
  const gain = line.slope * 1e6
  const middle = (at(line.offsetV) + at(atEnd)) / 2
  return (
    <g>
      <line
        x1={x(range.lowV)}
        x2={x(end)}
        y1={at(lineAt(line, range.lowV))}
        y2={at(atEnd)}
        stroke="var(--ink)"
        strokeWidth={1.25}
      />
      <line
        x1={x(line.pivotV)}
        x2={x(line.pivotV)}
        y1={at(0)}
        y2={at(line.offsetV)}
        stroke="var(--tide)"
        strokeWidth={3}
      />
      <line
        x1={x(end)}
        x2={x(end)}
        y1={at(line.offsetV)}
        y2={at(atEnd)}
        stroke="var(--copper)"
        strokeWidth={3}
      />
      <PlotText
        x={x(line.pivotV) + 8}
        y={at(Math.max(0, line.offsetV)) - 7}
        colour="var(--tide)"
        weight={500}
      >{`offset ${numberText(micro, labelDecimals(Math.abs(micro)), true)} µV`}</PlotText>
      <PlotText
        x={x(end) - 8}
        y={middle + 4}
        anchor="end"
        colour="var(--copper)"
        weight={500}
      >{`gain ${numberText(gain, labelDecimals(Math.abs(gain)), true)} ppm`}</PlotText>
    </g>
  )
}
