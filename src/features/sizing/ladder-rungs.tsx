import type { Ladder, Rung } from '../../../shared/solver/sizing/ladder.ts'
import { halfRails, type LadderFrame } from './ladder-frame.ts'
import { isAboveRails } from './ladder-words.ts'

export const ladderColours = { gain: 'var(--copper)', offset: 'var(--tide)' } as const
const rungPx = 6
const overhang = 3

/** From the step to the reach; dashed on to the last missing rung. */
export function Rails({ ladder, centre, frame }: { ladder: Ladder; centre: number; frame: LadderFrame }) {
  const { y } = frame
  const missing = ladder.rungs.filter(({ kind }) => kind === 'missing')
  const below = missing.filter(({ bit }) => bit < 0).at(-1)
  const above = missing.filter(({ bit }) => bit >= 0).at(-1)
  const foot = y(ladder.stepV)
  const head = ladder.reachV > 0 ? Math.min(y(ladder.reachV), foot) : foot
  const both = (from: number, to: number) =>
    [-1, 1].map((side) => `M${centre + side * halfRails} ${from}V${to}`).join('')
  return (
    <g fill="none" strokeWidth={1.5}>
      <path d={both(foot, head)} stroke={ladderColours[ladder.which]} />
      {above && <path d={both(head, y(above.outputV))} stroke="var(--bad)" strokeDasharray="3 3" />}
      {below && <path d={both(foot, y(below.outputV))} stroke="var(--caution)" strokeDasharray="3 3" />}
    </g>
  )
}

/** Filled: the demand uses it. Hollow: to spare, or above the rails. Dashed: missing. */
export function RungMark(props: { ladder: Ladder; rung: Rung; centre: number; y: number }) {
  const { ladder, rung, centre, y } = props
  const isMissing = rung.kind === 'missing'
  const isFilled = rung.kind === 'needed' && !isAboveRails(ladder, rung)
  const own = ladderColours[ladder.which]
  const colour = isMissing ? (rung.bit < 0 ? 'var(--caution)' : 'var(--bad)') : own
  const half = halfRails + overhang
  const inset = isFilled ? 0 : 0.5
  return (
    <>
      {/* The target reaches over the whole rung and its number. */}
      <rect x={centre - half - 22} y={y - 12} width={2 * half + 22} height={24} fill="transparent" />
      <rect
        data-rung={isMissing ? 'missing' : isFilled ? 'filled' : 'hollow'}
        x={centre - half + inset}
        y={y - rungPx / 2 + inset}
        width={2 * (half - inset)}
        height={rungPx - 2 * inset}
        fill={isFilled ? own : 'var(--paper)'}
        stroke={isFilled ? 'none' : colour}
        strokeWidth={1}
        {...(isMissing ? { strokeDasharray: '3 3' } : {})}
      />
      {!isMissing && (
        <text
          x={centre - half - 7}
          y={y}
          dy="0.35em"
          fontSize={11}
          fontFamily="Fira Sans, sans-serif"
          textAnchor="end"
          fill={isFilled ? 'var(--ink)' : 'var(--ink-2)'}
        >
          {rung.bit}
        </text>
      )}
    </>
  )
}
