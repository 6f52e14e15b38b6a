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

/** In order from the top, each at its place; those that would cover one another stand as a block about their middle. */
export function spread(labels: readonly EndLabel[]): EndLabel[] {
  const blocks: EndLabel[][] = []
  for (const label of [...labels].sort((a, b) => a.y - b.y)) {
    let block = [label]
    // A block that grows reaches further up too: it may meet the one above.
    for (let above = blocks.at(-1); above && meets(above, block); above = blocks.at(-1)) {
      block = [...above, ...block]
      blocks.pop()
    }
    blocks.push(block)
  }
  return blocks.flatMap((block) =>
    block.map((label, i) => ({ ...label, y: middle(block) + (i - (block.length - 1) / 2) * lineHeight })),
  )
}

const meets = (above: readonly EndLabel[], below: readonly EndLabel[]): boolean =>
  middle(below) - middle(above) < ((above.length + below.length) * lineHeight) / 2

const middle = (group: readonly EndLabel[]): number =>
  group.reduce((sum, one) => sum + one.y, 0) / group.length
