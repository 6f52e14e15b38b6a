import { Fragment } from 'react'
import { Explain } from './explain.tsx'
import type { Explained } from './explained.ts'
import type { Piece } from './verdict-lines.ts'

type ExplainedSentenceProps = Explained & {
  pieces: readonly Piece[]
  onField?: ((path: string) => void) | undefined
}

/** Each number of a sentence says on demand where it comes from. */
export function ExplainedSentence({ pieces, design, result, onField }: ExplainedSentenceProps) {
  return pieces.map(({ text, number, place }) =>
    number === null ? (
      <Fragment key={place}>{text}</Fragment>
    ) : (
      <Explain
        key={place}
        design={design}
        result={result}
        of={[{ label: number.label, path: number.path }]}
        name={number.label}
        onField={onField}
        className="-mx-0.5 -my-1 px-0.5"
      >
        {text}
      </Explain>
    ),
  )
}
