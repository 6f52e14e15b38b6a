import { Fragment } from 'react'
import { Explain } from './explain.tsx'
import type { Explained } from './explained.ts'

/** A number as it stands in a sentence, and where it comes from. */
export type NumberInText = { text: string; label: string; path: string }

/** `place` stays the same while texts change, so that a number keeps its element and the focus on it. */
type Piece = { text: string; number: NumberInText | null; place: string }

/** A sentence with its numbers, each found after the one before; one that does not occur stays plain text. */
export function piecesOf(sentence: string, numbers: readonly NumberInText[]): Piece[] {
  const pieces: Piece[] = []
  let at = 0
  let place = 'start'
  for (const number of numbers) {
    const found = sentence.indexOf(number.text, at)
    if (found < 0) continue
    pieces.push({ text: sentence.slice(at, found), number: null, place })
    pieces.push({ text: number.text, number, place: number.path })
    at = found + number.text.length
    place = `after ${number.path}`
  }
  pieces.push({ text: sentence.slice(at), number: null, place })
  return pieces.filter(({ text }) => text !== '')
}

type ExplainedSentenceProps = Explained & {
  sentence: string
  numbers: readonly NumberInText[]
  onField?: ((path: string) => void) | undefined
}

export function ExplainedSentence({ sentence, numbers, design, result, onField }: ExplainedSentenceProps) {
  return piecesOf(sentence, numbers).map(({ text, number, place }) =>
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
