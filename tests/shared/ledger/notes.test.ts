import { describe, expect, it } from 'vitest'
import { sha256, verifyEd25519 } from '../../../server/ledger/crypto.ts'
import {
  checkCheckpoint,
  keyName,
  parseVerifierKey,
  signCheckpoint,
  verifierKey,
} from '../../../shared/ledger/checkpoint.ts'
import { fromBase64, toBase64, toHex } from '../../../shared/ledger/hash.ts'
import { leafBytes, leafHash } from '../../../shared/ledger/leaf.ts'
import { checkReceipt, restoreReceipt, signReceipt } from '../../../shared/ledger/receipt.ts'
import { testKey, utf8 } from '../../support/server-crypto.ts'

const { key, sign } = testKey()
const other = testKey()
const checkpoint = { origin: key.name, size: 12, root: Uint8Array.from(sha256(utf8('root'))) }

describe('checkpoint (signed note)', () => {
  const note = signCheckpoint(sha256, checkpoint, key, sign)

  it('has origin, size, root, an empty line and one signature line', () => {
    const [origin, size, root, empty, signature, end, ...more] = note.split('\n')
    expect([origin, size, root, empty, end, more]).toEqual([
      key.name,
      '12',
      toBase64(checkpoint.root),
      '',
      '',
      [],
    ])
    expect(signature).toMatch(new RegExp(`^\u2014 ${key.name} [A-Za-z0-9+/]{91}=$`))
  })

  it('checks under its key and no other', () => {
    expect(checkCheckpoint(sha256, note, key, verifyEd25519)).toEqual(checkpoint)
    expect(checkCheckpoint(sha256, note, other.key, verifyEd25519)).toBeNull()
  })

  it.each([
    ['another size', note.replace('\n12\n', '\n13\n')],
    ['another origin', note.replace(key.name, 'else.example/ledger')],
    ['no signature', note.split('\n\n')[0]!],
    ['a damaged signature', note.replace(/.{8}=\n$/, 'AAAAAAAA=\n')],
    ['a size that is no number', signCheckpoint(sha256, { ...checkpoint, size: 1.5 }, key, sign)],
  ])('refuses %s', (_, changed) => {
    expect(checkCheckpoint(sha256, changed, key, verifyEd25519)).toBeNull()
  })

  it('passes over signatures of others', () => {
    const line = signCheckpoint(sha256, checkpoint, other.key, other.sign).split('\n').at(-2)!
    expect(checkCheckpoint(sha256, `${note}${line}\n`, key, verifyEd25519)).toEqual(checkpoint)
  })
})

describe('verifier key', () => {
  it('reads back, also when base64 holds a plus', () => {
    for (let i = 0; i < 30; i++) {
      const one = testKey().key
      expect(parseVerifierKey(sha256, `${verifierKey(sha256, one)}\n`)).toEqual(one)
    }
  })

  it('refuses another name, hash, type and form', () => {
    const text = verifierKey(sha256, key)
    expect(parseVerifierKey(sha256, text.replace('test', 'best'))).toBeNull()
    expect(parseVerifierKey(sha256, text.replace(/\+[0-9a-f]/, '+z'))).toBeNull()
    expect(
      parseVerifierKey(sha256, text.replace(`${keyName(sha256, key)}+A`, `${keyName(sha256, key)}+B`)),
    ).toBeNull()
    expect(parseVerifierKey(sha256, 'nonsense')).toBeNull()
  })

  it('has the key hash of the signed-note format', () => {
    const bytes = Buffer.concat([utf8(`${key.name}\n`), Uint8Array.of(1), key.publicKey])
    expect(keyName(sha256, key)).toBe(`${key.name}+${toHex(sha256(bytes)).slice(0, 8)}`)
  })
})

describe('receipt', () => {
  const promised = {
    record: '01a230b2-a46d-7315-89af-a51980fdfb2a',
    leaf: toHex(sha256(utf8('leaf'))),
    recordedAt: '2026-03-04T05:06:07.890Z',
  }
  const receipt = signReceipt(promised, keyName(sha256, key), sign)

  it('promises the ledger within a minute, and checks', () => {
    expect(receipt.includedBy).toBe('2026-03-04T05:07:07.890Z')
    expect(checkReceipt(sha256, receipt, key, verifyEd25519)).toBe(true)
    expect(restoreReceipt(promised, receipt.key, fromBase64(receipt.signature)!)).toEqual(receipt)
  })

  it('does not check when anything in it is changed', () => {
    for (const changed of [
      { ...receipt, leaf: receipt.leaf.replace(/^./, (c) => (c === 'a' ? 'b' : 'a')) },
      { ...receipt, includedBy: '2026-03-04T05:08:07.890Z' },
      { ...receipt, record: receipt.record.replace('2a', '2b') },
      { ...receipt, signature: 'AAAA' },
    ]) {
      expect(checkReceipt(sha256, changed, key, verifyEd25519)).toBe(false)
    }
    expect(checkReceipt(sha256, receipt, other.key, verifyEd25519)).toBe(false)
  })
})

describe('leaf', () => {
  it('is the RFC 8785 form of kind, time and body, from the body as stored', () => {
    const bytes = leafBytes('key', '2026-01-02T03:04:05.678Z', utf8('{"a":1}'))
    expect(new TextDecoder().decode(bytes)).toBe(
      '{"at":"2026-01-02T03:04:05.678Z","body":{"a":1},"kind":"key"}',
    )
  })

  it('differs when only the kind or the time differs', () => {
    const of = (kind: 'key' | 'role', at: string) => toHex(leafHash(sha256, leafBytes(kind, at, utf8('{}'))))
    const at = '2026-01-02T03:04:05.678Z'
    expect(new Set([of('key', at), of('role', at), of('key', at.replace('8Z', '9Z'))]).size).toBe(3)
  })
})
