import { designDocument } from '../../shared/contract/design.ts'
import type { DesignLine, Revision } from '../../shared/contract/designs.ts'
import type { Instrument } from '../../shared/contract/instruments.ts'
import type { Role } from '../../shared/contract/primitives.ts'
import type { RecordLine, Record as TrimRecord } from '../../shared/contract/record.ts'
import type { Me } from '../../shared/contract/session.ts'
import type { Station } from '../../shared/contract/stations.ts'
import type { Token } from '../../shared/contract/tokens.ts'
import { revisionLine } from './revision-lines.ts'
import { codesResult, measured } from './web-results.ts'

/** Answers of the server for tests of pages. `web-fixtures.test.ts` checks each against its schema. */

export const hash = 'a3'.repeat(32)
const adjusterSource = { bits: 12, coding: 'offset-binary', lowV: -2.5, highV: 2.5 }

export const design = designDocument.parse({
  format: 'ogee.design/1',
  title: 'Detector bias source, output A',
  converter: { bits: 18, coding: 'straight-binary', inlLsb: 1 },
  channels: ['1', '2'],
  ranges: [{ id: 'u10', label: '0 V to 10 V', lowV: 0, highV: 10, offsetAt: 'zero-volts' }],
  adjusters: {
    gain: {
      effect: { kind: 'measured', slopePerV: 0.00208, offsetPerV: 0 },
      effectTolerance: 0.2,
      node: { nominalV: 0, minV: -5, maxV: 5, inputOhm: 250000 },
      source: { ...adjusterSource, inlLsb: 1, driftPpmPerK: 5 },
      network: { kind: 'divider', topOhm: 8660, bottomOhm: 1500 },
    },
    offset: {
      effect: { kind: 'output-summing', feedbackOhm: 10000, adjustOhm: 1000000, inverting: true },
      effectTolerance: 0.2,
      node: { nominalV: 0, minV: -5, maxV: 5 },
      source: adjusterSource,
      network: { kind: 'direct' },
    },
  },
  budget: {
    gain: [
      { name: 'Converter gain error', limitPpm: 120, distribution: 'rectangular', when: 'initial' },
      { name: 'Reference drift', limitPpm: 20, distribution: 'rectangular', when: 'drift' },
    ],
    offset: [{ name: 'Amplifier offset', limitV: 0.00003, distribution: 'normal', k: 2, when: 'initial' }],
  },
  sizing: { combine: 'worst-case', margin: 0.25, temperatureSpanK: 20 },
  target: { residual: { value: 0.5, unit: 'LSB' } },
  measurement: {
    method: 'best-fit',
    points: [0, 65536, 131072, 196608, 262143],
    readings: 4,
    noiseV: 0.0000015,
    instrument: { gainPpm: 3, offsetV: 0.000002 },
  },
  decision: { rule: 'guarded', tolerance: { value: 1, unit: 'LSB' } },
})

const revisionLines: DesignLine['revisions'] = [
  revisionLine({
    state: 'released',
    title: design.title,
    releasedBy: 'S. Brandt',
    releasedAt: '2026-03-02T10:00:00Z',
    hash,
  }),
  revisionLine({ number: 2, title: design.title, createdAt: '2026-05-20T09:00:00Z', hash }),
]
export const designLine: DesignLine = {
  key: 'DBS-A',
  title: design.title,
  released: 1,
  copiedFrom: null,
  revisions: revisionLines,
}
export function revision(number: 1 | 2): Revision {
  const line = revisionLines[number - 1]
  if (!line) throw new Error('no such revision')
  return {
    ...line,
    key: 'DBS-A',
    document: design,
    bytes: btoa(JSON.stringify(design)),
    authorMayRelease: false,
  }
}

export function me(role: Role = 'engineer'): Me {
  const names = { administrator: 'S. Brandt', engineer: 'M. Okafor', operator: 'T. Ruiz', auditor: 'A. Hale' }
  return {
    who: { kind: 'person', id: `person-${role}`, name: names[role], email: `${role}@example.org`, role },
    server: { version: '0.1.0', solver: '1.0.0', ledger: 'ogee.example', serverTime: '2026-11-25T14:10:00Z' },
  }
}

export function recordId(n: number): string {
  return `00000000-0000-4000-8000-${String(n).padStart(12, '0')}`
}

export function record(n: number, change: Partial<TrimRecord> = {}): TrimRecord {
  const recordedAt = '2026-11-25T14:09:40Z'
  return {
    format: 'ogee.record/1',
    id: recordId(n),
    number: 1_004_000 + n,
    kind: 'trim',
    unit: 'DBS-24170-031',
    channel: '1',
    range: 'u10',
    lot: '2417',
    design: 'DBS-A',
    revision: 1,
    designHash: hash,
    pass: 1,
    follows: null,
    applied: 'neutral',
    effects: 'design',
    points: measured.map(([code, , value]) => ({ code, measured: value })),
    conditions: { temperatureC: 23.4, instrument: 'DMM-07', note: 'lid closed, 30 min warm' },
    reason: null,
    claimed: null,
    result: codesResult,
    verdict: 'ok',
    accepted: true,
    by: { kind: 'person', id: 'person-operator', name: 'T. Ruiz', role: 'operator' },
    station: 'station A',
    measuredAt: '2026-11-25T14:09:38Z',
    recordedAt,
    notices: [],
    receipt: {
      format: 'ogee.receipt/1',
      record: recordId(n),
      leaf: '9f'.repeat(32),
      recordedAt,
      includedBy: '2026-11-25T14:10:40Z',
      key: 'ogee.example+2c70e12b',
      signature: btoa('s'.repeat(64)),
    },
    ledger: { index: 1_004_000 + n },
    ...change,
  }
}

const verdicts = [
  'ok',
  'ok',
  'pass',
  'conditional-pass',
  'out-of-reach',
  'suspect',
  'too-coarse',
  'fail',
] as const

export function recordLine(n: number): RecordLine {
  const verdict = verdicts[n % verdicts.length] ?? 'ok'
  const trims = verdict !== 'pass' && verdict !== 'conditional-pass' && verdict !== 'fail'
  const none = verdict === 'out-of-reach'
  return {
    id: recordId(n),
    number: 1_004_000 + n,
    kind: trims ? 'trim' : 'verify',
    unit: `DBS-24170-${String(n % 97).padStart(3, '0')}`,
    channel: '1',
    range: 'u10',
    lot: '2417',
    design: 'DBS-A',
    revision: 1,
    pass: 1 + (n % 3 === 0 ? 1 : 0),
    verdict,
    accepted: verdict === 'ok' || verdict === 'too-coarse',
    gainErrorPpm: ((n * 37) % 400) - 203.44,
    offsetErrorV: (((n * 13) % 40) - 20) * 1e-6,
    gainCode: none ? null : 2000 + n,
    offsetCode: none ? null : 2048,
    worstLsb: none ? null : 0.05 + (n % 7) / 10,
    attempt: 1 + (n % 5 === 0 ? 1 : 0),
    finding: n % 40 === 0 ? 'open' : null,
    by: n % 2 === 0 ? 'T. Ruiz' : 'station B',
    station: n % 2 === 0 ? 'station A' : 'station B',
    measuredAt: null,
    recordedAt: new Date(Date.UTC(2026, 10, 25, 14, 0, 0) + n * 19_000).toISOString(),
  }
}

/** A day so many days from today: what is due is judged by today's date. */
export const day = (fromToday: number) =>
  new Date(Date.now() + fromToday * 86_400_000).toISOString().slice(0, 10)

function instrument(id: string, dueInDays: number, change: Partial<Instrument> = {}): Instrument {
  return {
    id,
    serial: `QX-${id}`,
    title: 'Reference voltmeter, 8½ digits',
    gainPpm: 4,
    offsetV: 1e-6,
    calibratedOn: day(dueInDays - 365),
    dueOn: day(dueInDays),
    createdAt: '2025-03-02T10:00:00Z',
    changedAt: '2026-03-02T10:00:00Z',
    changedBy: 'S. Brandt',
    retiredAt: null,
    etag: '"3"',
    ...change,
  }
}
export const instruments: Instrument[] = [
  instrument('DMM-07', 200),
  instrument('DMM-08', -1, { offsetV: 2.5e-6 }),
  instrument('DMM-12', 12),
  instrument('DMM-02', -400, { retiredAt: '2026-01-09T10:00:00Z' }),
]

export const recorders = [
  { id: 'demoA000', name: 'Station A script' },
  { id: '33333333-3333-4333-8333-333333333333', name: 'T. Ruiz' },
]

export const stations: Station[] = [
  {
    id: '11111111-1111-4111-8111-111111111111',
    name: 'station A',
    createdAt: '2026-01-10T08:00:00Z',
    retiredAt: null,
  },
  {
    id: '22222222-2222-4222-8222-222222222222',
    name: 'station B',
    createdAt: '2026-01-10T08:00:00Z',
    retiredAt: null,
  },
  {
    id: '33333333-3333-4333-8333-333333333333',
    name: 'station old',
    createdAt: '2025-01-10T08:00:00Z',
    retiredAt: '2026-02-01T08:00:00Z',
  },
]

export const tokens: Token[] = [
  {
    id: 'aB3dE5gH',
    name: 'line 2 script',
    station: 'station A',
    scopes: ['trims:write', 'trims:read'],
    designs: null,
    createdBy: 'S. Brandt',
    createdAt: '2026-10-01T08:00:00Z',
    expiresAt: '2099-01-01T08:00:00Z',
    lastUsedAt: '2026-11-25T13:00:00Z',
    revokedAt: null,
  },
  {
    id: 'zZ9yY8xX',
    name: 'old script',
    station: 'station B',
    scopes: ['trims:write'],
    designs: ['DBS-A'],
    createdBy: 'S. Brandt',
    createdAt: '2026-01-01T08:00:00Z',
    expiresAt: '2099-01-01T08:00:00Z',
    lastUsedAt: null,
    revokedAt: '2026-05-01T08:00:00Z',
  },
]
export const tokenText = `ogee_aB3dE5gH_${'x'.repeat(36)}`

export const checkpointText = `ogee.example\n1004317\n${btoa('r'.repeat(32))}\n\n\u2014 ogee.example ${btoa('s'.repeat(68))}\n`
export const verifierKey = `ogee.example+2c70e12b+${btoa(`\u0001${'k'.repeat(32)}`)}\n`
export const ledgerKey = {
  number: 1,
  key: verifierKey.trim(),
  at: '2026-03-02T09:00:00.000Z',
  statement: null,
}
export const checkpoints = [3, 2].map((number) => ({
  number,
  size: 1_004_300 + number,
  root: String(number).repeat(64),
  at: `2026-11-25T14:10:0${number}.000Z`,
  note: checkpointText,
}))
