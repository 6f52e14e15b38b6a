/**
 * A seeded source of uniform numbers in [0, 1): xoshiro128** (Blackman and Vigna, 2018), two 32-bit words for the 53
 * bits of a double. Whole-number steps only, so every engine gives the same numbers.
 */
export type Random = () => number

/** Said in results of simulations: a change of either is a new solver version. */
export const GENERATOR = 'xoshiro128**'

/** One source that can be set to any stream again and again, without making a new one each time. */
export type Streams = { random: Random; restart(seed: number, stream: number): void }

/**
 * The stream of one simulated thing: `stream` numbers it, so that unit 7 is the same unit however many are asked for.
 * @param seed whole number, 0 to 2^53 - 1
 * @param stream whole number, 0 to 2^32 - 1
 * @example randomStream(1, 0)() === randomStream(1, 0)() // true
 */
export function randomStream(seed: number, stream: number): Random {
  const { random, restart } = randomStreams()
  restart(seed, stream)
  return random
}

/** As `randomStream`, for many streams one after another. Starts at seed 0, stream 0. */
export function randomStreams(): Streams {
  const s = new Int32Array(4)
  const word = (): number => {
    const s1 = s[1]!
    const result = Math.imul(rotated(Math.imul(s1, 5), 7), 9) >>> 0
    const s2 = s[2]! ^ s[0]!
    const s3 = s[3]! ^ s1
    s[1] = s1 ^ s2
    s[0] = s[0]! ^ s3
    s[2] = s2 ^ (s1 << 9)
    s[3] = rotated(s3, 11)
    return result
  }
  /** Spreads the three words over the state: each is stirred in, then four are taken out. */
  const restart = (seed: number, stream: number): void => {
    let state = 0x9e3779b9
    state = stirred(state ^ stirred((seed >>> 0) + 0x7f4a7c15))
    state = stirred(state ^ stirred((Math.floor(seed / 4294967296) >>> 0) + 0x7f4a7c15))
    state = stirred(state ^ stirred((stream >>> 0) + 0x7f4a7c15))
    for (let i = 0; i < 4; i++) {
      state = (state + 0x9e3779b9) | 0
      s[i] = stirred(state)
    }
  }
  restart(0, 0)
  return { random: () => ((word() >>> 5) * 67108864 + (word() >>> 6)) / 9007199254740992, restart }
}

const rotated = (x: number, by: number) => (x << by) | (x >>> (32 - by))

/** The finaliser of MurmurHash3 (Appleby). */
function stirred(word: number): number {
  let h = word | 0
  h = Math.imul(h ^ (h >>> 16), 0x85ebca6b)
  h = Math.imul(h ^ (h >>> 13), 0xc2b2ae35)
  return h ^ (h >>> 16)
}
