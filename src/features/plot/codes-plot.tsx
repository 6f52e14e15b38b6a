import { scaleLinear } from 'd3-scale'
import { useState } from 'react'
import { type Box, type Scale, YAxis } from '../../ui/plot/axes.tsx'
import { PlotFigure } from '../../ui/plot/plot-figure.tsx'
import { codeText } from '../../ui/plot/plot-numbers.ts'
import { PlotSvg } from '../../ui/plot/plot-svg.tsx'
import { useWalk } from '../../ui/plot/walk-points.ts'

/** The codes of one trim. `at` is when it was recorded. */
export type CodesAt = {
  id: string
  at: string
  number: number
  gain: number | null
  offset: number | null
  isThis: boolean
}
type Which = 'gain' | 'offset'

const height = 190
const colours = { gain: 'var(--copper)', offset: 'var(--tide)' } as const

/** How the codes of one unit, channel and range went over the years, oldest first. */
export function CodesPlot({ trims }: { trims: readonly CodesAt[] }) {
  const units = (['gain', 'offset'] as const).filter((which) => trims.some((trim) => trim[which] !== null))
  const [unit, setUnit] = useState<Which>(units[0] ?? 'gain')
  return (
    <PlotFigure
      title="Codes over time"
      note={`${trims.length} trims of this unit, channel and range`}
      units={units.map((which) => [which, `${which} code`] as const)}
      unit={unit}
      onUnit={(chosen) => setUnit(chosen as Which)}
      table={{
        head: ['time, UTC', 'record', 'gain\ncode', 'offset\ncode'],
        rows: trims.map(({ at, number, gain, offset }) => [
          shortTime(at),
          codeText(number),
          gain === null ? 'none' : codeText(gain),
          offset === null ? 'none' : codeText(offset),
        ]),
        csvHead: ['recorded_at', 'number', 'gain_code', 'offset_code'],
        csvRows: trims.map(({ at, number, gain, offset }) => [at, number, gain, offset]),
      }}
      caption="Marks: the code of each trim that gave one; the larger mark is this record. No error bars: codes are whole numbers."
    >
      {(width) => <Drawing trims={trims} which={unit} width={width} />}
    </PlotFigure>
  )
}

function Drawing({ trims, which, width }: { trims: readonly CodesAt[]; which: Which; width: number }) {
  const shown = trims.flatMap((trim) => {
    const code = trim[which]
    return code === null ? [] : [{ ...trim, code, ms: Date.parse(trim.at) }]
  })
  const stop = useWalk(shown.length)
  const box: Box = { left: 55, right: Math.max(120, width - 24), top: 24, bottom: height - 34 }
  const x = scaleLinear(
    widened(
      shown.map(({ ms }) => ms),
      3_600_000,
    ),
    [box.left + 12, box.right - 12],
  )
  const y = scaleLinear(
    widened(
      shown.map(({ code }) => code),
      2,
    ),
    [box.bottom, box.top],
  ).nice()
  const colour = colours[which]
  const line = shown.map(({ ms, code }, i) => `${i === 0 ? 'M' : 'L'}${x(ms)} ${y(code)}`).join('')
  return (
    <PlotSvg width={width} height={height} label={`${which} code over time, ${shown.length} trims.`}>
      <YAxis y={y} box={box} unit={`${which} code`} side="left" grid />
      <TimeAxis x={x} box={box} />
      <path d={line} stroke={colour} strokeWidth={1.25} fill="none" />
      {shown.map(({ id, at, number, code, ms, isThis }, i) => (
        <g
          key={id}
          {...stop(i)}
          aria-label={`${shortTime(at)}: ${which} code ${codeText(code)}, record ${codeText(number)}`}
        >
          <rect x={x(ms) - 12} y={y(code) - 12} width={24} height={24} fill="transparent" />
          {which === 'gain' ? (
            <circle cx={x(ms)} cy={y(code)} r={isThis ? 5 : 3} fill={colour} />
          ) : (
            <rect
              x={x(ms) - (isThis ? 5 : 3)}
              y={y(code) - (isThis ? 5 : 3)}
              width={isThis ? 10 : 6}
              height={isThis ? 10 : 6}
              fill={colour}
            />
          )}
        </g>
      ))}
    </PlotSvg>
  )
}

/** Days at round places between the first and the last; the hour too where all is within two days. */
function TimeAxis({ x, box }: { x: Scale; box: Box }) {
  const [from = 0, to = 1] = x.domain()
  const count = Math.max(2, Math.min(6, Math.floor((box.right - box.left) / 110)))
  const isShort = to - from < 2 * 86_400_000
  return (
    <g fontSize={11} fontFamily="Fira Sans, sans-serif" fill="var(--ink-2)">
      <line x1={box.left} x2={box.right} y1={box.bottom} y2={box.bottom} stroke="var(--rule)" />
      {Array.from({ length: count }, (_, i) => from + ((to - from) * (i + 0.5)) / count).map((ms) => (
        <g key={ms} transform={`translate(${x(ms)} ${box.bottom})`}>
          <line y2={-4} stroke="var(--rule)" />
          <text y={13} textAnchor="middle">
            {isShort
              ? shortTime(new Date(ms).toISOString()).slice(5)
              : new Date(ms).toISOString().slice(0, 10)}
          </text>
        </g>
      ))}
      <text x={box.right} y={box.bottom + 28} textAnchor="end" fill="var(--ink-3)">
        recorded, UTC
      </text>
    </g>
  )
}

const shortTime = (at: string) => at.slice(0, 16).replace('T', ' ')

/** From the least to the largest, never of no width. */
function widened(values: readonly number[], least: number): [number, number] {
  const low = Math.min(...values)
  const high = Math.max(...values)
  const missing = Math.max(0, least - (high - low)) / 2
  return [low - missing, high + missing]
}
