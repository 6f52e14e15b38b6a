import type { Sha256 } from '../../shared/ledger/hash.ts'

/**
 * SHA-256 (FIPS 180-4) in the browser, where the platform's own only answers later: the ledger's checks are pure functions that
 * want the hash at once. About 30 MB a second; one proof hashes a few kilobytes.
 */

const rounds = 64
const rotate = (word: number, by: number) => (word >>> by) | (word << (32 - by))

/** First 32 bits of the fractional parts of cube roots (k) and square roots (start) of the first primes, by section 4.2.2 and 5.3.3. */
const { k, start } = constants()

function constants() {
  const primes: number[] = []
  for (let n = 2; primes.length < rounds; n++) if (primes.every((prime) => n % prime !== 0)) primes.push(n)
  const fraction = (value: number) => Math.floor((value - Math.floor(value)) * 2 ** 32) | 0
  return {
    k: Int32Array.from(primes, (prime) => fraction(Math.cbrt(prime))),
    start: Int32Array.from(primes.slice(0, 8), (prime) => fraction(Math.sqrt(prime))),
  }
}

export const sha256: Sha256 = (bytes) => {
  const state = Int32Array.from(start)
  const words = new Int32Array(rounds)
  const padded = pad(bytes)
  for (let at = 0; at < padded.byteLength; at += 64) {
    for (let i = 0; i < 16; i++) words[i] = padded.getInt32(at + 4 * i)
    expand(words)
    compress(state, words)
  }
  const digest = new DataView(new ArrayBuffer(32))
  state.forEach((word, i) => {
    digest.setInt32(4 * i, word)
  })
  return new Uint8Array(digest.buffer)
}

/** A one bit, zeros, and the length in bits, to a whole number of blocks. */
function pad(bytes: Uint8Array): DataView {
  const length = Math.ceil((bytes.length + 9) / 64) * 64
  const padded = new Uint8Array(length)
  padded.set(bytes)
  padded[bytes.length] = 0x80
  const view = new DataView(padded.buffer)
  view.setUint32(length - 8, Math.floor(bytes.length / 2 ** 29))
  view.setUint32(length - 4, (bytes.length * 8) >>> 0)
  return view
}

function expand(words: Int32Array): void {
  for (let i = 16; i < rounds; i++) {
    const a = words[i - 15]!
    const b = words[i - 2]!
    const s0 = rotate(a, 7) ^ rotate(a, 18) ^ (a >>> 3)
    const s1 = rotate(b, 17) ^ rotate(b, 19) ^ (b >>> 10)
    words[i] = (words[i - 16]! + s0 + words[i - 7]! + s1) | 0
  }
}

function compress(state: Int32Array, words: Int32Array): void {
  let [a = 0, b = 0, c = 0, d = 0, e = 0, f = 0, g = 0, h = 0] = state
  for (let i = 0; i < rounds; i++) {
    const s1 = rotate(e, 6) ^ rotate(e, 11) ^ rotate(e, 25)
    const t1 = (h + s1 + ((e & f) ^ (~e & g)) + k[i]! + words[i]!) | 0
    const s0 = rotate(a, 2) ^ rotate(a, 13) ^ rotate(a, 22)
    const t2 = (s0 + ((a & b) ^ (a & c) ^ (b & c))) | 0
    h = g
    g = f
    f = e
    e = (d + t1) | 0
    d = c
    c = b
    b = a
    a = (t1 + t2) | 0
  }
  for (const [i, word] of [a, b, c, d, e, f, g, h].entries()) state[i] = (state[i]! + word) | 0
}
