import { OgeeError } from '../shared/errors.ts'

/** Codes said to be loaded while measuring: `neutral`, or `gain=K,offset=K` with one or both. */
export type Applied = 'neutral' | { gain?: number; offset?: number }

export function readApplied(text: string): Applied {
  if (text === 'neutral') return 'neutral'
  const applied: { gain?: number; offset?: number } = {}
  for (const part of text.split(',')) {
    const [, which, code] = /^(gain|offset)=(\d+|0[xX][0-9A-Fa-f]+)$/.exec(part.trim()) ?? []
    if ((which !== 'gain' && which !== 'offset') || code === undefined || applied[which] !== undefined) {
      throw new OgeeError(
        'usage',
        `--applied takes neutral or codes such as gain=2593,offset=2048; ${JSON.stringify(text)} is neither.`,
      )
    }
    applied[which] = Number(code)
  }
  return applied
}
