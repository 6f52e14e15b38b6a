import { useState } from 'react'
import { YIELD_TRIALS_MAX } from '../../../shared/solver/yield/simulate.ts'

export type Wish = {
  seed: string
  trials: string
  setSeed: (text: string) => void
  setTrials: (text: string) => void
  /** Null where one of the two cannot be read; `problem` says which. */
  options: { seed: number; trials: number } | null
  problem: string | null
}

/** Seed and trials as typed. The same two and the same design give the same numbers. */
export function useWish(): Wish {
  const [seed, setSeed] = useState('1')
  const [trials, setTrials] = useState('100 000')
  const readSeed = whole(seed, 0, Number.MAX_SAFE_INTEGER)
  const readTrials = whole(trials, 1, YIELD_TRIALS_MAX)
  const problem =
    readSeed === null
      ? 'Seed takes a whole number from 0.'
      : readTrials === null
        ? 'Trials takes a whole number from 1 to 10 000 000.'
        : null
  const options = readSeed === null || readTrials === null ? null : { seed: readSeed, trials: readTrials }
  return { seed, trials, setSeed, setTrials, options, problem }
}

function whole(text: string, least: number, most: number): number | null {
  const digits = text.replaceAll(/[\s\u2009\u202f\u00a0]/g, '')
  const value = /^\d{1,16}$/.test(digits) ? Number(digits) : Number.NaN
  return value >= least && value <= most ? value : null
}
