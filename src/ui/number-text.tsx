import { Fragment } from 'react'
import { groupDigits } from './number-format.ts'

/**
 * A number that is already written out ("-1021.7", "262143"): true minus, groups of three from the point when a part
 * has five digits or more. The gap is letter spacing, so a copy has no spaces in it.
 */
export function NumberText({ children }: { children: string }) {
  const pieces = groupDigits(children)
  return (
    <span className="whitespace-nowrap">
      {pieces.map((piece, i) => (
        // biome-ignore lint/suspicious/noArrayIndexKey: pieces of one text
        <Fragment key={i}>
          {piece.gap ? <span className="digit-gap">{piece.text}</span> : piece.text}
        </Fragment>
      ))}
    </span>
  )
}

/** A count or a code: whole numbers, grouped. */
export function Whole({ value }: { value: number }) {
  return <NumberText>{String(value)}</NumberText>
}
