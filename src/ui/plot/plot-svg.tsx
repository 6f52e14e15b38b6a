import type { ReactNode } from 'react'

/** The drawing: a group of points that speak for themselves, reached by one tab stop and arrow keys. */
export function PlotSvg(props: { width: number; height: number; label: string; children: ReactNode }) {
  const spoken = { role: 'group', 'aria-label': `${props.label} Arrow keys walk it.` }
  return (
    // biome-ignore lint/a11y/noSvgWithoutTitle: a label names it; a title would show as a tip over every point
    <svg
      width={props.width}
      height={props.height}
      // Paper may be narrower than the window for which it was drawn: there, and only there, it is scaled down.
      viewBox={`0 0 ${props.width} ${props.height}`}
      className="block overflow-visible print:h-auto print:max-w-full"
      {...spoken}
    >
      {props.children}
    </svg>
  )
}
