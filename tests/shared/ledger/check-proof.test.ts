import { describe, expect, it } from 'vitest'
import { sha256, verifyEd25519 } from '../../../server/ledger/crypto.ts'
import { canonicalBytes } from '../../../shared/ledger/canonical.ts'
import { checkProof } from '../../../shared/ledger/check-proof.ts'
import { keyName, signCheckpoint, signerNames } from '../../../shared/ledger/checkpoint.ts'
import { fromHex, toBase64, toHex } from '../../../shared/ledger/hash.ts'
import { keysFrom, signKeyChange } from '../../../shared/ledger/key-chain.ts'
import { leafBytes, leafHash } from '../../../shared/ledger/leaf.ts'
import { inclusionParts, proofHashes } from '../../../shared/ledger/proof.ts'
import { appendLeaves, rootOf } from '../../../shared/ledger/tree.ts'
import { testKey, utf8 } from '../../support/server-crypto.ts'

const crypto = { sha256, verify: verifyEd25519 }
const recordedAt = '2026-11-24T14:09:40.123Z'
const record = { id: '01a230b2-a46d-7315-89af-a51980fdfb2a', recordedAt, unit: '031', result: { gain: 2587 } }
const body = canonicalBytes(record)
const hash = leafHash(sha256, leafBytes('record', recordedAt, body))

/** A proof made from a tree in memory: the checker is held against the tree's own code, which has vectors of its own. */
function proofOf(index: number, size: number, signer: ReturnType<typeof testKey>) {
  const leaves = Array.from({ length: size }, (_, i) => (i === index ? hash : sha256(utf8(String(i)))))
  const { added, peaks } = appendLeaves(sha256, 0, [], leaves)
  const at = new Map(added.map((node) => [`${node.level}/${node.index}`, node.hash]))
  const path = proofHashes(
    sha256,
    inclusionParts(index, size),
    (place) => at.get(`${place.level}/${place.index}`)!,
  )
  const checkpoint = { origin: signer.key.name, size, root: rootOf(sha256, peaks) }
  return {
    format: 'ogee.proof/1',
    record: toBase64(body),
    leaf: toHex(hash),
    index,
    path: path.map(toHex),
    checkpoint: signCheckpoint(sha256, checkpoint, signer.key, signer.sign),
  }
}

const signer = testKey()
const proof = proofOf(5, 13, signer)

describe('a proof file', () => {
  it('checks with the key alone, at every place of trees up to 17', () => {
    for (let size = 1; size <= 17; size++) {
      for (let index = 0; index < size; index++) {
        const checked = checkProof(crypto, proofOf(index, size, signer), signer.key)
        expect(checked, `${index} of ${size}`).toMatchObject({ ok: true, recordId: record.id, index })
      }
    }
  })

  it('gives the record as hashed and who signed', () => {
    expect(checkProof(crypto, proof, signer.key)).toMatchObject({
      ok: true,
      record: new TextDecoder().decode(body),
      recordedAt,
      signedBy: keyName(sha256, signer.key),
      checkpoint: { size: 13 },
    })
  })

  const otherRecord = toBase64(canonicalBytes({ ...record, unit: '032' }))
  const elsewhere = testKey()
  it.each([
    ['nothing', null, 'form'],
    ['another format', { ...proof, format: 'ogee.proof/2' }, 'form'],
    ['a record that is no JSON', { ...proof, record: toBase64(utf8('{')) }, 'form'],
    ['a record without a time', { ...proof, record: toBase64(utf8('{"id":"x"}')) }, 'form'],
    ['a changed record', { ...proof, record: otherRecord }, 'record'],
    ['another leaf', { ...proof, leaf: toHex(sha256(utf8('x'))) }, 'record'],
    ['another index', { ...proof, index: 4 }, 'path'],
    ['an index behind the tree', { ...proof, index: 13 }, 'path'],
    ['a changed hash', { ...proof, path: [...proof.path.slice(1), proof.path[0]!] }, 'path'],
    ['a hash too few', { ...proof, path: proof.path.slice(1) }, 'path'],
    ['a hash too many', { ...proof, path: [...proof.path, proof.path[0]!] }, 'path'],
    ['the checkpoint of another tree', { ...proof, checkpoint: proofOf(5, 12, signer).checkpoint }, 'path'],
    [
      'a changed checkpoint',
      { ...proof, checkpoint: proof.checkpoint.replace('\n13\n', '\n14\n') },
      'signature',
    ],
    ['no signature', { ...proof, checkpoint: proof.checkpoint.split('\n\n')[0]! }, 'signature'],
    ['a stranger for a signer', proofOf(5, 13, elsewhere), 'key'],
  ])('with %s is refused', (_, changed, fault) => {
    expect(checkProof(crypto, changed, signer.key)).toMatchObject({ ok: false, fault })
  })
})

describe('after a change of the key', () => {
  const newer = testKey()
  const newest = testKey()
  const changes = [signKeyChange(sha256, newer, newest), signKeyChange(sha256, signer, newer)]

  it('whoever keeps the oldest or the newest can check both ways', () => {
    const late = { ...proofOf(5, 13, newest), keys: changes }
    const early = { ...proof, keys: changes }
    for (const kept of [signer, newer, newest]) {
      expect(checkProof(crypto, late, kept.key)).toMatchObject({ ok: true })
      expect(checkProof(crypto, early, kept.key)).toMatchObject({ ok: true })
    }
  })

  it('a change that either key did not sign leads nowhere', () => {
    const [, first] = changes as [unknown, (typeof changes)[number]]
    const { signatures } = first
    const wrong = { replaced: signatures!.replacing, replacing: signatures!.replaced }
    for (const broken of [
      { ...first, signatures: { ...signatures!, replaced: wrong.replaced } },
      { ...first, signatures: { ...signatures!, replacing: wrong.replacing } },
      { ...first, signatures: undefined },
      { ...first, replaces: null },
    ]) {
      expect(keysFrom(crypto, signer.key, [broken])).toEqual([signer.key])
      const proofed = { ...proofOf(5, 13, newer), keys: [broken] }
      expect(checkProof(crypto, proofed, signer.key)).toMatchObject({ ok: false, fault: 'key' })
    }
  })

  it('a stranger cannot hand over to a key of his own', () => {
    const stranger = testKey()
    const statements = [signKeyChange(sha256, stranger, newest), ...changes]
    expect(keysFrom(crypto, stranger.key, [changes[0]!])).toEqual([stranger.key])
    expect(keysFrom(crypto, signer.key, [changes[1]!])).toHaveLength(2)
    // Whoever signs for the newest must hold it: it may say what it replaced, which nobody else has to believe.
    expect(keysFrom(crypto, signer.key, statements)).toHaveLength(3)
  })

  it('a key that was replaced hands over to no other one for those who keep a later key', () => {
    const minted = testKey()
    const keys = [...changes, signKeyChange(sha256, newer, minted)]
    const forged = { ...proofOf(5, 13, minted), keys }
    expect(checkProof(crypto, forged, newest.key)).toMatchObject({ ok: false, fault: 'key' })
    expect(keysFrom(crypto, newest.key, keys)).toHaveLength(3)
    for (const kept of [signer, newer, newest]) {
      expect(checkProof(crypto, { ...proof, keys }, kept.key)).toMatchObject({ ok: true })
    }
  })
})

it('reads who claims to have signed, and hexadecimal as written only', () => {
  expect(signerNames(proof.checkpoint)).toEqual([keyName(sha256, signer.key)])
  expect(signerNames('a\n\n\u2014 name short\nx')).toEqual([])
  expect(fromHex('00ff')).toEqual(Uint8Array.of(0, 255))
  for (const text of ['0', '0G', 'FF', ' 00']) expect(fromHex(text)).toBeNull()
})
