import type { ReactNode } from 'react'

/** Round = usable, square = failed, triangle = limit, stair = step, diamond = doubt. Drawn 12 by 12. */
export type Shape =
  | 'disc'
  | 'half-disc'
  | 'half-square'
  | 'crossed-square'
  | 'pressed-triangle'
  | 'stair'
  | 'triangle-and-stair'
  | 'diamond'

const stair = 'M1 11V8.5H4.25V5.5H7.5V2.5H11V11Z'
const drawings: Record<Shape, ReactNode> = {
  disc: <circle cx="6" cy="6" r="5" fill="currentColor" />,
  'half-disc': (
    <>
      <circle cx="6" cy="6" r="4.4" fill="none" stroke="currentColor" strokeWidth="1.2" />
      <path d="M6 1.6A4.4 4.4 0 0 0 6 10.4Z" fill="currentColor" />
    </>
  ),
  'half-square': (
    <>
      <rect x="1.6" y="1.6" width="8.8" height="8.8" fill="none" stroke="currentColor" strokeWidth="1.2" />
      <path d="M1.6 1.6H6V10.4H1.6Z" fill="currentColor" />
    </>
  ),
  'crossed-square': (
    // The cross is cut out as a hole, so the ground shows through in every theme.
    <path
      fill="currentColor"
      fillRule="evenodd"
      d="M1 1H11V11H1Z M6 5.1 3.9 3 3 3.9 5.1 6 3 8.1 3.9 9 6 6.9 8.1 9 9 8.1 6.9 6 9 3.9 8.1 3Z"
    />
  ),
  'pressed-triangle': <path d="M1 1.2H11V2.8H1Z M6 4 11 11H1Z" fill="currentColor" />,
  stair: <path d={stair} fill="currentColor" />,
  'triangle-and-stair': (
    <>
      <path d="M1 1.2H11V2.8H1Z M6 4 11 11H1Z" fill="currentColor" />
      <path d={stair} fill="currentColor" transform="translate(13 0)" />
    </>
  ),
  diamond: (
    <>
      <path d="M6 .9 11.1 6 6 11.1 .9 6Z" fill="none" stroke="currentColor" strokeWidth="1.3" />
      <circle cx="6" cy="6" r="1.5" fill="currentColor" />
    </>
  ),
}

/** For use inside other drawings: the same shapes as a group, centred on 6, 6. */
export function ShapeDrawing({ shape }: { shape: Shape }) {
  return <g>{drawings[shape]}</g>
}

/** Hidden from speech unless it carries a label of its own. */
export function VerdictShape({ shape, label }: { shape: Shape; label?: string }) {
  const width = shape === 'triangle-and-stair' ? 25 : 12
  const look = {
    viewBox: `0 0 ${width} 12`,
    width,
    height: 12,
    className: 'inline-block shrink-0 align-[-1px] forced-colors:text-[CanvasText]',
  }
  if (label === undefined) {
    return (
      <svg aria-hidden="true" {...look}>
        {drawings[shape]}
      </svg>
    )
  }
  return (
    <svg role="img" aria-label={label} {...look}>
      <title>{label}</title>
      {drawings[shape]}
    </svg>
  )
}
