import { readFileSync } from 'node:fs'
import { describe, expect, it } from 'vitest'
import { sha256 } from '../../../server/ledger/crypto.ts'
import { checkConsistency } from '../../../shared/ledger/consistency.ts'
import { toHex } from '../../../shared/ledger/hash.ts'
import { leafHash } from '../../../shared/ledger/leaf.ts'
import {
  consistencyParts,
  inclusionParts,
  proofHashes,
  rootFromInclusion,
} from '../../../shared/ledger/proof.ts'
import { appendLeaves, type NodePlace, nodeHash, peakPlaces, rootOf } from '../../../shared/ledger/tree.ts'
import { runSeed, seededRandom } from '../../support/random.ts'
import { hex, utf8 } from '../../support/server-crypto.ts'
import { mth, path, proof } from './reference-tree.ts'

type Inclusion = {
  leafIdx: number
  treeSize: number
  root: string
  leafHash: string
  proof: string[] | null
  desc: string
  wantErr: boolean
}
type Consistency = Omit<Inclusion, 'leafIdx' | 'treeSize' | 'root' | 'leafHash'> & {
  size1: number
  size2: number
  root1: string
  root2: string
}
type Vectors = {
  leaf_inputs_hex: string[]
  root_by_size_hex: string[]
  node_hashes_by_level_hex: string[][]
  hasher_vectors: { what: string; hex: string }[]
  published_inclusion_cases: Inclusion[]
  published_consistency_cases: Consistency[]
  sample_must_reject_inclusion: Inclusion[]
  sample_must_reject_consistency: Consistency[]
}
const vectors = JSON.parse(readFileSync('tests/vectors/merkle-rfc9162.json', 'utf8')) as Vectors
const b64 = (text: string | null | undefined) => Buffer.from(text ?? '', 'base64')

/** A tree grown leaf by leaf in the given portions, with every node that ever completed. */
function grow(data: readonly Uint8Array[], portions: (left: number) => number) {
  const nodes = new Map<string, Uint8Array>()
  let size = 0
  let peaks: Uint8Array[] = []
  const roots: Uint8Array[] = [rootOf(sha256, peaks)]
  while (size < data.length) {
    const some = data.slice(size, size + portions(data.length - size))
    const grown = appendLeaves(
      sha256,
      size,
      peaks,
      some.map((bytes) => leafHash(sha256, bytes)),
    )
    for (const { level, index, hash } of grown.added) {
      expect(nodes.has(`${level}/${index}`), 'a node is added once').toBe(false)
      nodes.set(`${level}/${index}`, hash)
    }
    size = grown.size
    peaks = grown.peaks
    roots[size] = rootOf(sha256, peaks)
  }
  const hashAt = ({ level, index }: NodePlace) => nodes.get(`${level}/${index}`)!
  return { nodes, roots, hashAt, peaks }
}

describe('tree against published vectors (RFC 9162)', () => {
  const data = vectors.leaf_inputs_hex.map(hex)

  it('hashes leaves and nodes as published', () => {
    expect(toHex(leafHash(sha256, utf8('L123456')))).toBe(vectors.hasher_vectors[0]!.hex)
    expect(toHex(nodeHash(sha256, utf8('N123'), utf8('N456')))).toBe(vectors.hasher_vectors[1]!.hex)
    expect(toHex(leafHash(sha256, new Uint8Array()))).toBe(vectors.hasher_vectors[2]!.hex)
  })

  it('gives the published roots of sizes 0 to 8 and all published nodes', () => {
    const { roots, nodes } = grow(data, () => 1)
    expect(roots.map(toHex)).toEqual(vectors.root_by_size_hex)
    vectors.node_hashes_by_level_hex.forEach((level, l) => {
      level.forEach((hash, i) => {
        expect(toHex(nodes.get(`${l}/${i}`)!)).toBe(hash)
      })
    })
  })

  it.each([...vectors.published_inclusion_cases, ...vectors.sample_must_reject_inclusion])(
    'judges inclusion of $leafIdx in $treeSize: $desc',
    (c) => {
      const root = rootFromInclusion(sha256, b64(c.leafHash), c.leafIdx, c.treeSize, (c.proof ?? []).map(b64))
      expect(root !== null && toHex(root) === b64(c.root).toString('hex')).toBe(!c.wantErr)
    },
  )

  it.each([...vectors.published_consistency_cases, ...vectors.sample_must_reject_consistency])(
    'judges consistency of $size1 and $size2: $desc',
    (c) => {
      const older = { size: c.size1, root: b64(c.root1) }
      const newer = { size: c.size2, root: b64(c.root2) }
      expect(checkConsistency(sha256, older, newer, (c.proof ?? []).map(b64))).toBe(!c.wantErr)
    },
  )
})

describe('tree against a slow one written from the RFC', () => {
  const seed = runSeed()
  const random = seededRandom(seed)

  it(`agrees on roots, inclusion and consistency at random sizes (seed ${seed})`, () => {
    for (let round = 0; round < 40; round++) {
      const data = Array.from({ length: 1 + random.below(70) }, (_, i) => utf8(`leaf ${i} of ${round}`))
      const { roots, hashAt } = grow(data, (left) => 1 + random.below(left))
      const size = data.length
      const root = mth(data)
      expect(toHex(roots[size]!)).toBe(root.toString('hex'))

      const m = random.below(size)
      const parts = proofHashes(sha256, inclusionParts(m, size), hashAt)
      expect(parts.map(toHex)).toEqual(path(m, data).map(toHex))
      const leaf = leafHash(sha256, data[m]!)
      expect(rootFromInclusion(sha256, leaf, m, size, parts)).toEqual(roots[size])

      const from = 1 + random.below(size)
      const steps = proofHashes(sha256, consistencyParts(from, size), hashAt)
      expect(steps.map(toHex)).toEqual(proof(from, data).map(toHex))
      const older = { size: from, root: mth(data.slice(0, from)) }
      expect(checkConsistency(sha256, older, { size, root }, steps)).toBe(true)
    }
  })

  it(`refuses any proof with one bit changed, a hash too few or too many (seed ${seed})`, () => {
    const data = Array.from({ length: 37 }, (_, i) => utf8(`leaf ${i}`))
    const { hashAt } = grow(data, () => 1)
    const newer = { size: 37, root: mth(data) }
    for (let from = 1; from < 37; from++) {
      const older = { size: from, root: mth(data.slice(0, from)) }
      const steps = proofHashes(sha256, consistencyParts(from, 37), hashAt)
      expect(checkConsistency(sha256, older, newer, damaged(steps))).toBe(false)
      expect(checkConsistency(sha256, older, newer, steps.slice(1))).toBe(false)
      expect(checkConsistency(sha256, older, newer, [...steps, steps[0]!])).toBe(false)
      expect(checkConsistency(sha256, { ...older, size: from + 1 }, newer, steps)).toBe(false)
      const leaf = leafHash(sha256, data[from]!)
      const way = proofHashes(sha256, inclusionParts(from, 37), hashAt)
      expect(rootFromInclusion(sha256, leaf, from, 37, damaged(way))).not.toEqual(newer.root)
      expect(rootFromInclusion(sha256, leaf, from - 1, 37, way)).not.toEqual(newer.root)
      expect(rootFromInclusion(sha256, leaf, from, 37, way.slice(1))).toBeNull()
    }
  })

  function damaged(hashes: readonly Uint8Array[]): Uint8Array[] {
    const at = random.below(hashes.length)
    return hashes.map((hash, i) =>
      i === at ? Uint8Array.from(hash, (b, j) => (j === 5 ? b ^ 16 : b)) : hash,
    )
  }
})

describe('places of subtrees', () => {
  it('covers sizes over 2^32 without bit operators', () => {
    expect(peakPlaces(2 ** 40 + 3)).toEqual([
      { level: 40, index: 0 },
      { level: 1, index: 2 ** 39 },
      { level: 0, index: 2 ** 40 + 2 },
    ])
    expect(peakPlaces(6)).toEqual([
      { level: 2, index: 0 },
      { level: 1, index: 2 },
    ])
  })

  it('needs no more than about twice the logarithm of places for a proof', () => {
    for (const size of [1, 1000, 65_537, 1_000_003]) {
      const places =
        inclusionParts(size - 1, size).flat().length +
        consistencyParts(Math.ceil(size / 3), size).flat().length
      expect(places).toBeLessThanOrEqual(4 * Math.ceil(Math.log2(size + 1)) + 4)
    }
  })

  it('asks for peaks that fit the size, and for places that exist', () => {
    expect(() => appendLeaves(sha256, 3, [], [])).toThrow(RangeError)
    expect(() => inclusionParts(3, 3)).toThrow(RangeError)
    expect(() => consistencyParts(0, 3)).toThrow(RangeError)
  })
})
