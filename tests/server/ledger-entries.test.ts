import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { asText as asTextOfNode, crypto } from '../../cli/ledger/crypto.ts'
import { readAtSight } from '../../shared/ledger/check/at-sight.ts'
import { EntryChecker } from '../../shared/ledger/check/entry-checker.ts'
import { entryLine, readEntry } from '../../shared/ledger/check/entry-line.ts'
import { collectFaults } from '../../shared/ledger/check/faults.ts'
import { rowDifference } from '../../shared/ledger/check/record-row.ts'
import { api, post } from '../support/server-client.ts'
import { pointsOf, suspectPoints, trimBody } from '../support/server-factories.ts'
import { addToken } from '../support/server-harness.ts'
import { type Scene, serverScene } from '../support/server-scene.ts'

let scene: Scene
let token = ''
beforeAll(async () => {
  scene = await serverScene()
  const trim = await post(scene.url, scene.station, trimBody({ unit: 'E-1' }))
  const left = { unit: 'E-1', points: pointsOf({ gainPpm: 0.2 }), kind: 'verify', follows: trim.id }
  await post(scene.url, scene.station, trimBody(left))
  await post(scene.url, scene.engineer, trimBody({ unit: 'E-2 "½"' }))
  await post(scene.url, scene.engineer, trimBody({ unit: 'E-4 ½' }))
  const suspect = await post(scene.url, scene.station, trimBody({ unit: 'E-3', points: suspectPoints() }))
  const reason = 'Looked at by eye.'
  const override = { kind: 'override', design: 'U18', unit: 'E-3', follows: suspect.id, reason }
  await post(scene.url, scene.engineer, override)
  token = (await addToken(scene.harness, ['ledger:read'])).token
  await scene.harness.sequencer.drain()
})
afterAll(() => scene.harness.close())

const page = async (query = '') => {
  const reply = await fetch(`${scene.url}/api/v1/ledger/entries${query}`, {
    headers: { authorization: `Bearer ${token}` },
  })
  expect(reply.headers.get('content-type')).toBe('application/x-ndjson; charset=utf-8')
  const lines = (await reply.text()).trimEnd().split('\n')
  const end = JSON.parse(lines.pop()!) as { end: true; size: number; next: number | null }
  return { lines, end, entries: lines.map((line) => readEntry(Buffer.from(line))!) }
}

describe('GET /ledger/entries', () => {
  it('gives every entry once, in pages of any size, and says where it ends', async () => {
    const whole = await page()
    expect(whole.end).toEqual({ end: true, size: whole.lines.length, next: null })
    const inPieces: string[] = []
    for (let from: number | null = 0; from !== null; ) {
      const piece = await page(`?from=${from}&limit=3`)
      inPieces.push(...piece.lines)
      from = piece.end.next
    }
    expect(inPieces).toEqual(whole.lines)
    expect(whole.entries.map(({ index }) => index)).toEqual(whole.entries.map((_, i) => i))
    // Each line is JSON as well, whose leaf is what its bytes say.
    for (const [i, line] of whole.lines.entries()) {
      const leaf = JSON.parse(line).leaf
      expect(JSON.parse(Buffer.from(whole.entries[i]!.leaf!).toString())).toEqual(leaf)
    }
  })

  it('carries the released bytes, and every row agrees with its leaf', async () => {
    const { entries } = await page()
    expect(entries.filter(({ document }) => typeof document === 'string')).toHaveLength(2)
    const records = entries.filter(({ row }) => row !== null)
    expect(records).toHaveLength(6)
    for (const { row, leaf } of records) {
      expect(rowDifference(row!, JSON.parse(Buffer.from(leaf!).toString()).body)).toBeNull()
    }
  })

  it.each([
    ['of Node', asTextOfNode],
    ['of browsers', (bytes: Uint8Array) => new TextDecoder('latin1').decode(bytes)],
  ])(
    'agrees at sight, with texts %s, for measurements of tokens and people, and never where a field differs',
    async (_, asText) => {
      const { lines, entries } = await page()
      const seen = lines.flatMap((line, i) => {
        const { leaf, ...entry } = entries[i]!
        const sighted = readAtSight(Buffer.from(line), asText)
        if (!sighted) return []
        const { index, nodes, hash, row } = entry
        expect(sighted).toEqual({ index, nodes, hash, record: row!.id, leaf })
        return [{ entry, row: entry.row!, text: Buffer.from(leaf!).toString() }]
      })
      // What holds quotation marks is parsed.
      expect(seen.map(({ row }) => row.unit)).toEqual(['E-1', 'E-1', 'E-4 ½', 'E-3'])
      for (const { entry, row, text } of seen) {
        for (const [name, value] of Object.entries(row)) {
          if (name === 'attempt' || name === 'receipt' || name === 'notices') continue
          for (const other of [
            typeof value === 'number' ? value + 1 : `${String(value)}x`,
            value === null ? 0 : null,
            `${String(value)}","x":"`,
          ]) {
            const changed = { ...row, [name]: other }
            const line = Buffer.from(entryLine({ ...entry, row: changed }, text))
            expect(readEntry(line)?.row).toEqual(changed)
            expect(readAtSight(line, asText), `${row.kind} ${name} ${String(other)}`).toBeNull()
            expect(rowDifference(changed, JSON.parse(text).body), name).toContain(name)
          }
        }
      }
    },
  )

  it('takes no line for good whose receipt cannot be read', async () => {
    const { lines, entries } = await page()
    const record = entries.findIndex(({ row }) => row?.unit === 'E-1')
    const faultsOf = (change: (line: string) => string) => {
      const faults = collectFaults()
      const how = { sha256: crypto.sha256, asText: asTextOfNode, withReceipts: true }
      const checker = new EntryChecker(how, [scene.harness.deps.signer.key], [], faults)
      for (const [i, line] of lines.entries()) checker.take(Buffer.from(i === record ? change(line) : line))
      return faults.list().map(({ what, entry }) => ({ what, entry }))
    }
    expect(faultsOf((line) => line)).toEqual([])
    const broken = faultsOf((line) => line.replace('"receipt":{"key":"', '"receipt":{"key":"\u0001'))
    expect(broken).toEqual([{ what: 'entry-unreadable', entry: record }])
  })

  it('refuses pages that are too large, and tokens for some designs', async () => {
    expect((await api(scene.url, 'get', '/ledger/entries?limit=5001', { token })).status).toBe(422)
    const { token: narrow } = await addToken(scene.harness, ['ledger:read'], null, { designs: ['U18'] })
    for (const path of ['/ledger/entries', '/ledger/strays']) {
      const reply = await api(scene.url, 'get', path, { token: narrow })
      expect(reply.status).toBe(403)
      expect(reply.body.detail).toContain('one design only')
    }
  })
})
