/** Tells a barcode reader from fingers: keys a few milliseconds apart, ended by Enter (patterns.md, Bench). */

export type KeyTimes = { count: number; longestGapMs: number; lastAt: number }

export const noKeys: KeyTimes = { count: 0, longestGapMs: 0, lastAt: 0 }

const burstGapMs = 35
const burstLeast = 5
const pauseMs = 400

export function withKey(times: KeyTimes, key: string, at: number): KeyTimes {
  if (key.length !== 1 && key !== 'Enter' && key !== 'Shift') return noKeys
  const gap = at - times.lastAt
  if (times.count === 0 || gap > pauseMs) return { count: 1, longestGapMs: 0, lastAt: at }
  return { count: times.count + 1, longestGapMs: Math.max(times.longestGapMs, gap), lastAt: at }
}

/**
 * A burst into a cell is a serial only when it cannot be a reading: meters with a keyboard output type just as
 * fast, and what they type is a number.
 */
export function isBurst(times: KeyTimes, text: string): boolean {
  const letters = text.replaceAll(/[^\p{L}]/gu, '').length
  const isReading = /^[\s;]*[-+\u2212.\d]/.test(text) && letters <= 4
  return (
    times.count > burstLeast && times.longestGapMs <= burstGapMs && text.length >= burstLeast && !isReading
  )
}
