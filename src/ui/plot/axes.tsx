import type { ScaleLinear } from 'd3-scale'
import { decimalsFor, numberText } from './plot-numbers.ts'

export type Scale = ScaleLinear<number, number>
export type Box = { left: number; right: number; top: number; bottom: number }

const text = { fontSize: 11, fontFamily: 'Fira Sans, sans-serif' } as const

export const stepOf = (ticks: readonly number[]): number => (ticks[1] ?? 1) - (ticks[0] ?? 0)

/** Ticks of a scale that stand `least` pixels apart or more. */
export function ticksOf(scale: Scale, least: number): number[] {
  const [a = 0, b = 1] = scale.range()
  return scale.ticks(Math.max(2, Math.floor(Math.abs(b - a) / least)))
}

/** Quarters of a range, where points usually stand, when they are short numbers; else round steps. */
function quarters(x: Scale): number[] {
  const [low = 0, high = 1] = x.domain()
  const step = (high - low) / 4
  const isShort = decimalsFor(step) <= 3 && decimalsFor(low) <= 3
  return isShort ? [0, 1, 2, 3, 4].map((k) => low + k * step) : ticksOf(x, 90)
}

type XAxisProps = { x: Scale; box: Box; label: string; whole?: boolean }

export function XAxis({ x, box, label, whole = false }: XAxisProps) {
  const ticks = whole ? ticksOf(x, 30).filter(Number.isInteger) : quarters(x)
  const decimals = whole ? 0 : Math.max(1, decimalsFor(stepOf(ticks)), decimalsFor(ticks[0] ?? 0))
  return (
    <g {...text} fill="var(--ink-2)">
      {ticks.map((tick) => (
        <g key={tick} transform={`translate(${x(tick)} ${box.bottom})`}>
          <line y2={-4} stroke="var(--rule)" />
          <text y={13} textAnchor="middle">
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

type YAxisProps = {
  y: Scale
  box: Box
  unit: string
  side: 'left' | 'right'
  grid?: boolean
  signed?: boolean
}

export function YAxis({ y, box, unit, side, grid = false, signed = false }: YAxisProps) {
  const ticks = ticksOf(y, 38)
  const decimals = decimalsFor(stepOf(ticks))
  const edge = side === 'left' ? box.left : box.right
  const out = side === 'left' ? -8 : 18
  const anchor = side === 'left' ? 'end' : 'start'
  return (
    <g {...text} fill="var(--ink-2)">
      {grid &&
        ticks.map((tick) => (
          <line key={tick} x1={box.left} x2={box.right} y1={y(tick)} y2={y(tick)} stroke="var(--hair)" />
        ))}
      <line x1={edge} x2={edge} y1={box.top} y2={box.bottom} stroke="var(--rule)" />
      {ticks.map((tick) => (
        <g key={tick} transform={`translate(${edge} ${y(tick)})`}>
          {side === 'right' && <line x2={4} stroke="var(--rule)" />}
          <text x={out} dy="0.35em" textAnchor={anchor}>
            {numberText(tick, decimals, signed)}
          </text>
        </g>
      ))}
      <text x={edge + out} y={box.top - 8} textAnchor={anchor}>
        {unit}
      </text>
    </g>
  )
}

/** Hatching at 45 degrees, 5 px apart, for guard bands and reach. */
export function Hatch({ id }: { id: string }) {
  return (
    <pattern id={id} width={5} height={5} patternUnits="userSpaceOnUse" patternTransform="rotate(45)">
      <line x1={0.5} x2={0.5} y2={5} stroke="var(--rule)" strokeWidth={0.75} />
    </pattern>
  )
}

/** A bar with 6 px caps. */
export function ErrorBar({ x, from, to, colour }: { x: number; from: number; to: number; colour: string }) {
  return (
    <path
      d={`M${x - 3} ${from}h6M${x} ${from}V${to}M${x - 3} ${to}h6`}
      stroke={colour}
      strokeWidth={1.25}
      fill="none"
    />
  )
}

/** Text on the plot in its one size, with a ground so that lines behind do not cut it. */
export function PlotText(props: {
  x: number
  y: number
  anchor?: 'start' | 'middle' | 'end'
  colour?: string
  weight?: number
  children: string
}) {
  return (
    <text
      {...text}
      x={props.x}
      y={props.y}
      textAnchor={props.anchor ?? 'start'}
      fill={props.colour ?? 'var(--ink)'}
      fontWeight={props.weight ?? 400}
      stroke="var(--paper)"
      strokeWidth={3}
      paintOrder="stroke"
    >
      {props.children}
    </text>
  )
}
