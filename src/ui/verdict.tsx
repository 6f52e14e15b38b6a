import { type Shape, VerdictShape } from './verdict-shape.tsx'

/** Every verdict is shape + word + colour; colour only repeats what the other two say. */
const verdicts = {
  ok: { shape: 'disc', word: 'ok', tone: 'text-good' },
  covers: { shape: 'disc', word: 'covers', tone: 'text-good' },
  pass: { shape: 'disc', word: 'pass', tone: 'text-good' },
  'conditional-pass': { shape: 'half-disc', word: 'conditional pass', tone: 'text-caution' },
  'conditional-fail': { shape: 'half-square', word: 'conditional fail', tone: 'text-bad' },
  fail: { shape: 'crossed-square', word: 'fail', tone: 'text-bad' },
  'out-of-reach': { shape: 'pressed-triangle', word: 'out of reach', tone: 'text-bad' },
  short: { shape: 'pressed-triangle', word: 'short of reach', tone: 'text-bad' },
  'too-coarse': { shape: 'stair', word: 'too coarse', tone: 'text-caution' },
  both: { shape: 'triangle-and-stair', word: 'both', tone: 'text-bad' },
  suspect: { shape: 'diamond', word: 'suspect', tone: 'text-suspect' },
} as const satisfies Record<string, { shape: Shape; word: string; tone: string }>

export type VerdictName = keyof typeof verdicts

export function verdictWord(verdict: VerdictName): string {
  return verdicts[verdict].word
}

export function verdictTone(verdict: VerdictName): string {
  return verdicts[verdict].tone
}

/** Shape and word; `word` replaces the word where a sentence needs another ("proof checks", "same result"). */
export function Verdict({ verdict, word }: { verdict: VerdictName; word?: string }) {
  const { shape, word: own, tone } = verdicts[verdict]
  return (
    <span className={`font-semibold whitespace-nowrap ${tone}`}>
      <VerdictShape shape={shape} />
      <span className="ml-1.5">{word ?? own}</span>
    </span>
  )
}

/** The shape alone, where the word stands beside it already. `label` is spoken when it does not. */
export function VerdictMark({ verdict, label }: { verdict: VerdictName; label?: string }) {
  return (
    <span className={verdicts[verdict].tone}>
      <VerdictShape shape={verdicts[verdict].shape} {...(label ? { label } : {})} />
    </span>
  )
}
