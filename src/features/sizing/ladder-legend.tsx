import type { ReactNode } from 'react'

/** What the marks mean. */
export function LadderLegend() {
  return (
    <>
      <Item
        drawing={<rect y={1} width={24} height={6} fill="var(--ink)" />}
        width={24}
        height={8}
        word="bit needed"
      />
      <Item
        drawing={<rect x={0.5} y={1.5} width={23} height={5} fill="none" stroke="var(--ink)" />}
        width={24}
        height={8}
        word="bit to spare"
      />
      <Item
        drawing={<path d="M0 1H7V11H0" fill="none" stroke="var(--ink)" strokeWidth={1.75} />}
        width={8}
        height={12}
        word="what budget (top) and target (bottom) demand"
      />
      No error bars: limits, not measurements.
    </>
  )
}

function Item(props: { drawing: ReactNode; width: number; height: number; word: string }) {
  return (
    <span className="mr-3">
      <svg
        aria-hidden="true"
        width={props.width}
        height={props.height}
        className="mr-1.5 inline-block align-[-1px]"
      >
        {props.drawing}
      </svg>
      {props.word}
    </span>
  )
}
