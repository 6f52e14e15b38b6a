import { PlotText } from './axes.tsx'

export type EndLabel = { y: number; text: string; colour: string; weight?: number }

const lineHeight = 13

/** Direct labels at the right end, moved apart where they would cover one another. */
export function EndLabels({ x, labels }: { x: number; labels: readonly EndLabel[] }) {
  return spread(labels).map((label) => (
    <PlotText
      key={`${label.text} ${label.y}`}
      x={x}
      y={label.y + 4}
      colour={label.colour}
      weight={label.weight ?? 400}
    >
      {label.text}
    </PlotText>
  ))
}

/** In order from the top, each at its place or as far below the one above as a line of text needs; then centred again. */
export function spread(labels: readonly EndLabel[]): EndLabel[] {
  const sorted = [...labels].sort((a, b) => a.y - b.y)
  const groups: EndLabel[][] = []
  for (const label of sorted) {
    const above = groups.at(-1)
    const bottom = above ? middle(above) + (above.length * lineHeight) / 2 : Number.NEGATIVE_INFINITY
    if (above && label.y - lineHeight / 2 < bottom) above.push(label)
    else groups.push([label])
  }
  return groups.flatMap((group) =>
    group.map((label, i) => ({ ...label, y: middle(group) + (i - (group.length - 1) / 2) * lineHeight })),
  )
}

const middle = (group: readonly EndLabel[]): number =>
  group.reduce((sum, one) => sum + one.y, 0) / group.length
