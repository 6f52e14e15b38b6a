import { type Box, type Scale, stepOf, ticksOf } from '../../ui/plot/axes.tsx'
import { decimalsFor, numberText } from '../../ui/plot/plot-numbers.ts'

const text = { fontSize: 11, fontFamily: 'Fira Sans, sans-serif' } as const

type Props = { x: Scale; box: Box; label: string; least?: number; whole?: boolean }

/** An x axis with round ticks, for counts and errors that stand nowhere special. */
export function RoundAxis({ x, box, label, least = 70, whole = false }: Props) {
  const ticks = ticksOf(x, least).filter((tick) => !whole || Number.isInteger(tick))
  const decimals = whole ? 0 : decimalsFor(stepOf(ticks))
  return (
    <g {...text} fill="var(--ink-2)">
      {ticks.map((tick) => (
        <g key={tick} transform={`translate(${x(tick)} ${box.bottom})`}>
          <line y2={-4} stroke="var(--rule)" />
          <text y={14} textAnchor="middle">
            {numberText(tick, decimals)}
          </text>
        </g>
      ))}
      <text x={box.right} y={box.bottom + 28} textAnchor="end" fill="var(--ink-3)">
        {label}
      </text>
    </g>
  )
}
