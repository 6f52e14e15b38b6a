/**
 * A seeded source of uniform numbers in [0, 1): xoshiro128** (Blackman and Vigna, 2018), two 32-bit words for the 53
 * bits of a double. Whole-number steps only, so every engine gives the same numbers.
 */
export type Random = () => number

/**
 * The stream of one simulated thing: `stream` numbers it, so that unit 7 is the same unit however many are asked for.
 * @param seed whole number, 0 to 2^53 - 1
 * @param stream whole number, 0 to 2^32 - 1
 */
export function randomStream(seed: number, stream: number): Random {
  const next = spread([seed >>> 0, Math.floor(seed / 4294967296) >>> 0, stream >>> 0])
  const s = [next(), next(), next(), next()] as [number, number, number, number]
  const word = (): number => {
    const result = Math.imul(rotated(Math.imul(s[1], 5), 7), 9) >>> 0
    const t = s[1] << 9
    s[2] ^= s[0]
    s[3] ^= s[1]
    s[1] ^= s[2]
    s[0] ^= s[3]
    s[2] ^= t
    s[3] = rotated(s[3], 11)
    return result
  }
  return () => ((word() >>> 5) * 67108864 + (word() >>> 6)) / 9007199254740992
}

const rotated = (x: number, by: number) => (x << by) | (x >>> (32 - by))

/** Spreads a few words over a state: each is stirred in by the finaliser of MurmurHash3 (Appleby). */
function spread(words: readonly number[]): () => number {
  let state = 0x9e3779b9
  for (const word of words) state = stirred(state ^ stirred(word + 0x7f4a7c15))
  return () => {
    state = (state + 0x9e3779b9) | 0
    return stirred(state)
  }
}

function stirred(word: number): number {
  let h = word | 0
  h = Math.imul(h ^ (h >>> 16), 0x85ebca6b)
  h = Math.imul(h ^ (h >>> 13), 0xc2b2ae35)
  return h ^ (h >>> 16)
}
