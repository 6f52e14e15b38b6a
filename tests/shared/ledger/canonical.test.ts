import { createHash } from 'node:crypto'
import { readFileSync } from 'node:fs'
import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { canonicalBytes, canonicalText, type Json } from '../../../shared/ledger/canonical.ts'

type Vectors = {
  documents: { name: string; input_utf8: string; expected_utf8: string; expected_hex: string }[]
  appendix_b_numbers: { ieee754_hex: string; json: string }[]
  must_fail: { ieee754_hex: string }[]
  es6_number_stream: { sha256_of_first_lines: Record<string, string>; static_u64_hex: string[] }
}
const vectors = JSON.parse(readFileSync('tests/vectors/jcs-rfc8785.json', 'utf8')) as Vectors

const double = (hex: string) => Buffer.from(hex, 'hex').readDoubleBE()

describe('canonical form (RFC 8785)', () => {
  it.each(vectors.documents)(
    'writes the published document $name',
    ({ input_utf8, expected_utf8, expected_hex }) => {
      const value = JSON.parse(input_utf8) as Json
      expect(canonicalText(value)).toBe(expected_utf8)
      expect(Buffer.from(canonicalBytes(value)).toString('hex')).toBe(expected_hex)
    },
  )

  it.each(vectors.appendix_b_numbers)('writes the double $ieee754_hex as $json', ({ ieee754_hex, json }) => {
    expect(canonicalText(double(ieee754_hex))).toBe(json)
  })

  it.each(vectors.must_fail)('refuses the double $ieee754_hex', ({ ieee754_hex }) => {
    expect(() => canonicalText(double(ieee754_hex))).toThrow(expect.objectContaining({ code: 'not-finite' }))
  })

  it('writes the first 10,000 numbers of the published stream', () => {
    const hash = createHash('sha256')
    let written = 0
    for (const hex of streamOfDoubles(vectors.es6_number_stream.static_u64_hex)) {
      hash.update(`${hex.replace(/^0+(?=.)/, '')},${canonicalText(double(hex))}\n`)
      if (++written === 10_000) break
    }
    expect(hash.digest('hex')).toBe(vectors.es6_number_stream.sha256_of_first_lines['10000'])
  })

  it('refuses half characters in texts and in names', () => {
    const refused = expect.objectContaining({ code: 'invalid-document' })
    expect(() => canonicalText('a\ud83d')).toThrow(refused)
    expect(() => canonicalText({ '\udc00': 1 })).toThrow(refused)
    expect(canonicalText('\u{1f600}')).toBe('"\u{1f600}"')
  })

  it('refuses what JSON cannot say, and leaves absent members out', () => {
    expect(() => canonicalText([undefined] as unknown as Json)).toThrow('undefined')
    expect(() => canonicalText(new Date() as unknown as Json)).toThrow('plain objects')
    expect(canonicalText({ b: undefined, a: 1 })).toBe('{"a":1}')
  })

  it('does not depend on the order of members, and reads back as the same value', () => {
    fc.assert(
      fc.property(fc.jsonValue({ noUnicodeString: false }), (value) => {
        const text = canonicalText(value as Json)
        const back = JSON.parse(text) as Json
        expect(canonicalText(back)).toBe(text)
        expect(canonicalText(reversed(back))).toBe(text)
      }),
      { numRuns: 500 },
    )
  })
})

function reversed(value: Json): Json {
  if (Array.isArray(value)) return value.map(reversed)
  if (typeof value !== 'object' || value === null) return value
  return Object.fromEntries(
    Object.entries(value)
      .reverse()
      .map(([key, member]) => [key, reversed(member as Json)]),
  )
}

/** The published generator: a static list, 2,000 in a row from the smallest normal, then an iterated hash. */
function* streamOfDoubles(fixed: readonly string[]): Generator<string> {
  yield* fixed
  for (let i = 0n; i < 2000n; i++) yield (0x0010000000000000n + i).toString(16).padStart(16, '0')
  let block = Buffer.alloc(32)
  for (;;) {
    block = createHash('sha256').update(block).digest()
    for (let at = 0; at < 32; at += 8) {
      const value = block.readDoubleLE(at)
      if (value === 0 || !Number.isFinite(value)) continue
      yield block.readBigUInt64LE(at).toString(16).padStart(16, '0')
    }
  }
}
