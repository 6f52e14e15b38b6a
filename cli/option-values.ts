import { OgeeError } from '../shared/errors.ts'

/** The value of an option as text, or nothing when it was not given. */
export function text(value: string | boolean | readonly string[] | undefined): string | undefined {
  return typeof value === 'string' ? value : undefined
}

/** A whole number within bounds, or a usage error that names the flag. */
export function wholeNumber(flag: string, value: string, least: number, most: number): number {
  const number = /^\d+$/.test(value) ? Number(value) : Number.NaN
  if (number >= least && number <= most) return number
  throw new OgeeError('usage', `${flag} takes a whole number from ${least} to ${most}; ${value} is not one.`)
}

/** One of the words offered, or a usage error that lists them. */
export function oneOf<Word extends string>(flag: string, value: string, words: readonly Word[]): Word {
  const found = words.find((word) => word === value)
  if (found !== undefined) return found
  throw new OgeeError('usage', `${flag} takes ${words.join(', ')}; ${value} is none of them.`)
}
