import type { Box, Scale } from '../../ui/plot/axes.tsx'
import type { PlotPoint } from './plot-data.ts'

type GuardBandProps = {
  toleranceV: number
  /** Their bars are the U that the guard band takes off; none for the simple rule. */
  points: readonly PlotPoint[]
  x: Scale
  at: (volts: number) => number
  box: Box
  fill: string
}

/** Both tolerances, and what the guard band takes off them at each point. */
export function GuardBand({ toleranceV, points, x, at, box, fill }: GuardBandProps) {
  const withBars = points.filter((point) => point.barV !== null).sort((a, b) => a.idealV - b.idealV)
  const last = withBars.at(-1)
  return (
    <g>
      {[1, -1].map((side) => {
        const outer = at(side * toleranceV)
        const inner = withBars.map((p) => `${x(p.idealV)} ${at(side * (toleranceV - (p.barV ?? 0)))}`)
        return (
          <g key={side}>
            {withBars.length > 1 && (
              <path
                d={`M${x(withBars[0]?.idealV ?? 0)} ${outer}L${inner.join('L')}L${x(last?.idealV ?? 0)} ${outer}Z`}
                fill={fill}
              />
            )}
            <line x1={box.left} x2={box.right} y1={outer} y2={outer} stroke="var(--ink)" strokeWidth={1.5} />
          </g>
        )
      })}
    </g>
  )
}
