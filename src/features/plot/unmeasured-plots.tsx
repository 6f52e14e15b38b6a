import { decimalsFor, numberText } from '../../ui/plot/plot-numbers.ts'
import { useWidth } from '../../ui/plot/use-width.ts'

type Span = { lowV: number; highV: number }

/** The places of the two plots before anything is measured: drawn without the plots' own code, which loads with the first line. */
export function UnmeasuredPlots({ range }: { range: Span }) {
  return (
    <div className="mt-3 grid grid-cols-1 gap-x-7 gap-y-3 wide:grid-cols-2 print:grid-cols-2">
      <EmptyPlot title="Error as found" says="no points yet" range={range} />
      <EmptyPlot title="Error as left, against tolerance" says="not measured yet" range={range} />
    </div>
  )
}

const top = 16
const bottom = 166
const text = { fontSize: 11, fontFamily: 'Fira Sans, sans-serif', fill: 'var(--ink-2)' } as const

function EmptyPlot({ title, says, range }: { title: string; says: string; range: Span }) {
  const { ref, width } = useWidth(586)
  const left = 55
  const right = width - (width < 480 ? 60 : 88)
  const middle = (top + bottom) / 2
  const step = (range.highV - range.lowV) / 4
  const decimals = Math.min(3, Math.max(1, decimalsFor(step), decimalsFor(range.lowV)))
  const drawing = { role: 'img', 'aria-label': `${title}: ${says}.` }
  return (
    <section className="border-t border-rule pt-1">
      <h2 className="flex min-h-[30px] items-center text-body font-semibold">{title}</h2>
      <div ref={ref} className="min-w-0">
        {/* biome-ignore lint/a11y/noSvgWithoutTitle: a label names it; a title would show as a tip */}
        <svg width={width} height={bottom + 34} className="block overflow-visible" {...drawing}>
          <rect
            x={left}
            y={top}
            width={right - left}
            height={bottom - top}
            fill="none"
            stroke="var(--hair)"
          />
          <line x1={left} x2={right} y1={middle} y2={middle} stroke="var(--rule)" />
          <text {...text} x={left - 8} y={middle + 4} textAnchor="end">
            0
          </text>
          <text {...text} x={(left + right) / 2} y={middle - 14} textAnchor="middle" fill="var(--ink)">
            {says}
          </text>
          {[0, 1, 2, 3, 4].map((k) => (
            <text key={k} {...text} x={left + (k * (right - left)) / 4} y={bottom + 13} textAnchor="middle">
              {numberText(range.lowV + k * step, decimals)}
            </text>
          ))}
          <text {...text} x={right} y={bottom + 28} textAnchor="end" fill="var(--ink-3)">
            ideal output, V
          </text>
        </svg>
      </div>
    </section>
  )
}
