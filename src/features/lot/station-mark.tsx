const size = 4

/** Stations differ by mark shape, never by hue: filled circle, open square, open triangle, filled diamond, and again. */
export function StationMark({
  index,
  x,
  y,
  colour,
}: {
  index: number
  x: number
  y: number
  colour: string
}) {
  switch (index % 4) {
    case 0:
      return <circle cx={x} cy={y} r={size - 0.75} fill={colour} />
    case 1:
      return (
        <rect
          x={x - size + 1}
          y={y - size + 1}
          width={2 * size - 2}
          height={2 * size - 2}
          fill="var(--paper)"
          stroke={colour}
          strokeWidth={1.25}
        />
      )
    case 2:
      return (
        <path
          d={`M${x} ${y - size}l${size} ${2 * size - 1}h${-2 * size}z`}
          fill="var(--paper)"
          stroke={colour}
          strokeWidth={1.25}
        />
      )
    default:
      return (
        <path d={`M${x} ${y - size}l${size} ${size}l${-size} ${size}l${-size} ${-size}z`} fill={colour} />
      )
  }
}

export const markWords = ['Filled circles', 'Open squares', 'Open triangles', 'Filled diamonds']

/** "Filled circles: Station A. Open squares: Station B." */
export const markSentence = (stations: readonly string[]): string =>
  stations.map((station, i) => `${markWords[i % 4]}: ${station}.`).join(' ')
