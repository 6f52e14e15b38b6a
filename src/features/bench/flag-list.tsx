import { Caution } from '../../ui/caution.tsx'
import { NumberText } from '../../ui/number-text.tsx'
import type { FlagSentence } from './flag-sentences.ts'

/** Flags in words, under the points that raised them. */
export function FlagList({ flags, notes }: { flags: readonly FlagSentence[]; notes: readonly string[] }) {
  const isSuspect = flags.some((flag) => flag.isSuspect)
  return (
    <>
      {flags.length > 0 && (
        <div className="mt-2">
          <Caution tone={isSuspect ? 'suspect' : 'caution'}>
            {flags.map((flag) => (
              <p key={`${flag.word} ${flag.text}`}>
                <strong className="font-semibold">{flag.word}</strong> <Digits>{flag.text}</Digits>
              </p>
            ))}
          </Caution>
        </div>
      )}
      {notes.map((note) => (
        <p key={note} className="mt-1 text-small text-ink-2">
          {note}
        </p>
      ))}
    </>
  )
}

/** Groups the digits of codes within a sentence; other numbers are left as written. */
export function Digits({ children }: { children: string }) {
  return children.split(/(?<![\d.])(\d{5,})(?![\d.])/).map((part, index) =>
    // biome-ignore lint/suspicious/noArrayIndexKey: pieces of one sentence
    index % 2 === 1 ? <NumberText key={index}>{part}</NumberText> : part,
  )
}
