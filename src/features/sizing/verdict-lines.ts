import { type VerdictSentences, verdictSentences } from '../../../shared/design-words/verdict-sentences.ts'
import type { Explained } from './explained.ts'
import { type NumberInText, verdictNumbers } from './verdict-numbers.ts'

/** `place` stays the same while texts change, so that a number keeps its element and the focus on it. */
export type Piece = { text: string; number: NumberInText | null; place: string }

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

/** What is said of one adjuster. */
export type VerdictLine = Pick<VerdictSentences, 'which' | 'verdict' | 'headline' | 'plain' | 'remedy'> & {
  pieces: readonly Piece[]
}

export function verdictLines({ design, result }: Explained): VerdictLine[] {
  return verdictSentences(design, result).map(({ reach, step, bits, ...line }) => {
    const size = result.adjusters[line.which]
    const numbers = size ? verdictNumbers(line.which, size) : []
    return { ...line, pieces: piecesOf(`${reach} ${step} ${bits}`, numbers) }
  })
}

/** The texts of the verdict rows in the order in which they stand there; `form` is the same where nothing else differs. */
export type VerdictTexts = { form: string; texts: readonly string[] }

export function verdictTexts(explained: Explained): VerdictTexts {
  const forms: unknown[] = []
  const texts: string[] = []
  for (const { which, verdict, headline, pieces, remedy, plain } of verdictLines(explained)) {
    forms.push(which, verdict, remedy !== null, ...pieces.map(({ place }) => place))
    texts.push(headline, ...pieces.map(({ text }) => text), ' ')
    if (remedy !== null) texts.push(remedy)
    texts.push(plain)
  }
  for (const { path, message } of explained.result.remarks) {
    forms.push(path, message)
    texts.push(message)
  }
  return { form: forms.join('\n'), texts }
}
