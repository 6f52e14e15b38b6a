import { readFileSync } from 'node:fs'
import { codesDocument } from '../../../shared/contract/codes.ts'
import { designDocument } from '../../../shared/contract/design.ts'
import type { Revision } from '../../../shared/contract/designs.ts'
import type { Record as StoredRecord } from '../../../shared/contract/record.ts'
import type { Me } from '../../../shared/contract/session.ts'
import type { Unit } from '../../../shared/contract/units.ts'
import { computeCodes } from '../../../shared/solver/codes.ts'
import { revisionLine } from '../../support/revision-lines.ts'
import { examples } from './built-cli.ts'
import type { Seen } from './fake-server.ts'

/** Answers as the contract has them, for the fake server. */

const bytes = readFileSync(`${examples}/unipolar-18.design.json`)
export const design = designDocument.parse(JSON.parse(bytes.toString('utf8')))
const hash = '0'.repeat(64)
const at = '2026-03-02T14:09:40.123Z'
export const recordIds = [
  '01890a5d-ac96-774b-bcce-b302099a8057',
  '01890a5d-ac96-774b-bcce-b302099a8058',
] as const

export const me: Me = {
  who: {
    kind: 'token',
    id: 'Ab3dEf9h',
    name: 'line 1',
    station: 'Station A',
    scopes: ['trims:write', 'trims:read'],
    designs: null,
    expiresAt: '2027-01-01T00:00:00Z',
  },
  server: { version: '0.1.0', solver: '1.0.0', ledger: 'ogee.test', serverTime: at },
}

export const revision = (sha256: string): Revision => ({
  ...revisionLine({
    state: 'released',
    title: design.title,
    createdAt: at,
    releasedBy: 'S. Brandt',
    releasedAt: at,
    hash: sha256,
  }),
  key: 'DBS-A',
  document: design,
  authorMayRelease: false,
  bytes: bytes.toString('base64'),
})
export const designBytes = bytes

/** What `POST /trims` answers to this body: solved, as the server does. */
export function recordOf({ body }: Pick<Seen, 'body'>, number = 1_004_317): StoredRecord {
  const sent = body as { unit: string; points: { code: number; measured: number }[]; channel?: string }
  const result = codesDocument.parse(computeCodes(design, sent.points))
  const id = recordIds[0]
  return {
    format: 'ogee.record/1',
    id,
    number,
    kind: 'trim',
    unit: sent.unit,
    channel: sent.channel ?? '1',
    range: 'u10',
    lot: null,
    design: 'DBS-A',
    revision: 1,
    designHash: hash,
    pass: 1,
    follows: null,
    applied: 'neutral',
    effects: 'design',
    points: sent.points,
    conditions: {},
    reason: null,
    claimed: null,
    result,
    verdict: result.trim.verdict,
    accepted: result.trim.verdict === 'ok',
    by: { kind: 'token', id: 'Ab3dEf9h', name: 'line 1' },
    station: 'Station A',
    measuredAt: null,
    recordedAt: at,
    notices: [],
    receipt: {
      format: 'ogee.receipt/1',
      record: id,
      leaf: hash,
      recordedAt: at,
      includedBy: '2026-03-02T14:10:40.123Z',
      key: 'ogee.test+00000000',
      signature: 'AAAA',
    },
    ledger: null,
  }
}

type SentLine = { key: string; unit: string; [field: string]: unknown }
export const linesOf = ({ text }: Pick<Seen, 'text'>): SentLine[] =>
  text
    .split('\n')
    .filter((line) => line !== '')
    .map((line) => JSON.parse(line) as SentLine)

/** What `POST /batches` answers: each line as `outcome` says, or recorded, and the end. */
export function batchAnswer(
  seen: Pick<Seen, 'text'>,
  outcome: (line: SentLine, i: number) => object = (line) => ({
    status: 201,
    record: recordOf({ body: line }),
  }),
): string {
  const lines = linesOf(seen).map((line, i) => ({ line: i + 1, key: line.key, ...outcome(line, i) }))
  const end = { end: true, lines: lines.length, recorded: lines.length, replayed: 0, refused: 0 }
  return [...lines, end].map((line) => `${JSON.stringify(line)}\n`).join('')
}

export const unit: Unit = {
  design: 'DBS-A',
  serial: '031',
  current: [
    {
      channel: '1',
      range: 'u10',
      codes: { gain: 2593, offset: 2048 },
      words: { gain: '0xA21', offset: '0x800' },
      record: recordIds[0],
      number: 1_004_317,
      revision: 1,
      recordedAt: at,
      lastRecord: recordIds[0],
      pass: 1,
    },
  ],
}

export function line(number: number) {
  const record = recordOf({ body: { unit: '031', points: examplePoints } }, number)
  return {
    id: record.id,
    number,
    kind: record.kind,
    unit: record.unit,
    channel: record.channel,
    range: record.range,
    lot: null,
    design: record.design,
    revision: 1,
    pass: 1,
    verdict: record.verdict,
    accepted: true,
    gainErrorPpm: -203.4,
    offsetErrorV: 1.9e-6,
    gainCode: 2593,
    offsetCode: 2048,
    worstLsb: 0.05,
    attempt: 1,
    finding: null,
    by: 'line 1',
    station: 'Station A',
    measuredAt: null,
    recordedAt: at,
  }
}

export const examplePoints = readFileSync(`${examples}/unipolar-18.points.csv`, 'utf8')
  .trim()
  .split('\n')
  .slice(1)
  .map((row) => row.split(',').map(Number))
  .map(([code = 0, measured = 0]) => ({ code, measured }))
