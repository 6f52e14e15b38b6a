import { scaleLinear } from 'd3-scale'
import { useId } from 'react'
import { type Box, Hatch, PlotText } from '../../ui/plot/axes.tsx'
import { PlotFigure } from '../../ui/plot/plot-figure.tsx'
import { numberText } from '../../ui/plot/plot-numbers.ts'
import { PlotSvg } from '../../ui/plot/plot-svg.tsx'
import { useWalk } from '../../ui/plot/walk-points.ts'

/** `share` is signed: below nominal is negative; 1 is the whole reach on that side. */
export type ReachMark = { adjuster: 'gain' | 'offset'; share: number }

const colours = { gain: 'var(--copper)', offset: 'var(--tide)' }
const percent = (share: number): string => `${numberText(share * 100, Math.abs(share) < 1 ? 1 : 0)} %`

/** How far each adjuster would have to go, against its reach on both sides. */
export function ReachPlot({ title, marks }: { title: string; marks: readonly ReachMark[] }) {
  const hatch = useId()
  const stop = useWalk(marks.length)
  const most = Math.max(1.5, ...marks.map((mark) => Math.abs(mark.share) * 1.15))
  return (
    <PlotFigure
      title={title}
      units={[['share', '%']]}
      unit="share"
      onUnit={() => undefined}
      table={{
        head: ['adjuster', 'wanted, share\nof reach, %'],
        rows: marks.map((mark) => [mark.adjuster, numberText(mark.share * 100, 1, true)]),
        csvHead: ['adjuster', 'share_of_reach'],
        csvRows: marks.map((mark) => [mark.adjuster, mark.share]),
      }}
      caption="Each mark one adjuster. Hatched: within reach. No error bars: shares come from the fitted line."
    >
      {(width) => {
        const box: Box = { left: 20, right: width - 40, top: 46, bottom: 86 }
        const x = scaleLinear([-most, most], [box.left, box.right])
        const middle = (box.top + box.bottom) / 2
        return (
          <PlotSvg width={width} height={132} label={`${title}.`}>
            <defs>
              <Hatch id={hatch} />
            </defs>
            <rect
              x={x(-1)}
              width={x(1) - x(-1)}
              y={box.top}
              height={box.bottom - box.top}
              fill={`url(#${hatch})`}
            />
            <line x1={box.left} x2={box.right} y1={middle} y2={middle} stroke="var(--rule)" />
            {[-1, 0, 1].map((tick) => (
              <g key={tick}>
                {tick !== 0 && (
                  <line
                    x1={x(tick)}
                    x2={x(tick)}
                    y1={box.top - 8}
                    y2={box.bottom + 8}
                    stroke="var(--ink)"
                    strokeWidth={1.5}
                  />
                )}
                <PlotText x={x(tick)} y={box.bottom + 24} anchor="middle" colour="var(--ink-2)">
                  {tick === 0 ? '0 %' : percent(tick).replace('.0', '')}
                </PlotText>
              </g>
            ))}
            {marks.map((mark, index) => (
              <g
                key={mark.adjuster}
                {...stop(index)}
                aria-label={`${mark.adjuster}: ${percent(mark.share)} of the reach wanted`}
              >
                <rect x={x(mark.share) - 12} y={middle - 12} width={24} height={24} fill="transparent" />
                <line
                  x1={x(mark.share)}
                  x2={x(mark.share)}
                  y1={middle - 14}
                  y2={middle + 14}
                  stroke={colours[mark.adjuster]}
                  strokeWidth={3}
                />
                <PlotText
                  x={x(mark.share)}
                  y={box.top - (index === 0 ? 14 : 28)}
                  anchor="middle"
                  weight={500}
                  colour={colours[mark.adjuster]}
                >
                  {`${mark.adjuster} ${percent(Math.abs(mark.share))}`}
                </PlotText>
              </g>
            ))}
            <PlotText x={box.right} y={box.bottom + 40} anchor="end" colour="var(--ink-3)">
              wanted node change, share of reach
            </PlotText>
          </PlotSvg>
        )
      }}
    </PlotFigure>
  )
}
