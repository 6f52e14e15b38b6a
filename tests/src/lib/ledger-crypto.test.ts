import { createHash, randomBytes } from 'node:crypto'
import { describe, expect, test } from 'vitest'
import { withCrypto } from '../../../src/lib/ledger-crypto.ts'
import { sha256 } from '../../../src/lib/sha256.ts'
import { testKey } from '../../support/server-crypto.ts'

describe('SHA-256 of the browser', () => {
  test.each([
    ['', 'e3b0c44298fc1c149afbf4c8996fb92427ae41e4649b934ca495991b7852b855'],
    ['abc', 'ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad'],
    [
      'abcdbcdecdefdefgefghfghighijhijkijkljklmklmnlmnomnopnopq',
      '248d6a61d20638b8e5c026930c3e6039a33ce45964ff2167f6ecedd419db06c1',
    ],
  ])('of %j is as FIPS 180-4 publishes it', (text, hex) => {
    expect(Buffer.from(sha256(new TextEncoder().encode(text))).toString('hex')).toBe(hex)
  })

  test('agrees with node at every length around a block, and at random ones', () => {
    const lengths = [...Array.from({ length: 200 }, (_, i) => i), 4_095, 4_096, 100_003]
    for (const length of lengths) {
      const bytes = Uint8Array.from(randomBytes(length))
      expect(
        Buffer.from(sha256(bytes)).equals(createHash('sha256').update(bytes).digest()),
        String(length),
      ).toBe(true)
    }
  })
})

test('a check runs with what the browser says of each signature', async () => {
  const { key: named, sign } = testKey()
  const key = named.publicKey
  const bytes = Uint8Array.of(1, 2, 3)
  const good = sign(bytes)
  const bad = Uint8Array.from(good, (byte, i) => (i === 7 ? byte ^ 1 : byte))
  const answers = await withCrypto(({ verify }) => [
    verify(key, bytes, good),
    verify(key, bytes, bad),
    verify(key, Uint8Array.of(1, 2, 4), good),
  ])
  expect(answers).toEqual([true, false, false])
})
