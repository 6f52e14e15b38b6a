import { afterAll, beforeAll, beforeEach, describe, expect, it, vi } from 'vitest'
import { renderCertificate } from '../../server/certificate/render.ts'
import { Sheet } from '../../server/certificate/sheet.ts'
import { readCertificate } from '../../server/commands/certificate/read-certificate.ts'
import type { PersonPrincipal } from '../../server/http/principal.ts'
import { sha256, verifyEd25519 } from '../../server/ledger/crypto.ts'
import type { Proof } from '../../shared/contract/proof.ts'
import type { Record as TrimRecord } from '../../shared/contract/record.ts'
import { checkProof } from '../../shared/ledger/check-proof.ts'
import { filesInPdf } from '../support/pdf-files.ts'
import { api, post } from '../support/server-client.ts'
import { pointsOf, suspectPoints, trimBody } from '../support/server-factories.ts'
import { type Scene, serverScene } from '../support/server-scene.ts'

let scene: Scene
/** Every text that was put on a page since the test began. */
let said: string[]
const auditor = { kind: 'person', id: 'x', name: 'x', role: 'auditor' } as PersonPrincipal
const at = new Date('2026-11-26T09:14:00.000Z')

beforeAll(async () => {
  scene = await serverScene()
})
afterAll(() => scene.harness.close())
beforeEach(() => {
  said = []
  const { put } = Sheet.prototype
  const spy = vi.spyOn(Sheet.prototype, 'put').mockImplementation(function (this: Sheet, ...given) {
    said.push(given[0])
    return put.apply(this, given)
  })
  return () => spy.mockRestore()
})

const settled = () =>
  new Promise((resolve) => setTimeout(resolve, 1_050)).then(() => scene.harness.sequencer.drain())
const facts = (id: string) => readCertificate(scene.harness.database, id, auditor)
const text = () => said.join(' ').replaceAll('\u2009', '')

async function certificateOf(id: string): Promise<Buffer> {
  await settled()
  return renderCertificate(await facts(id), at)
}

async function trimAndVerify(unit: string): Promise<{ trim: TrimRecord; verify: TrimRecord }> {
  const trim = await post(scene.url, scene.station, trimBody({ unit }))
  const body = trimBody({ unit, kind: 'verify', points: pointsOf({ gainPpm: 0.2 }) })
  return { trim, verify: await post(scene.url, scene.station, body) }
}

const filesIn = (pdf: Buffer) => filesInPdf(pdf).map((text) => JSON.parse(text) as Proof)

describe('a certificate', () => {
  it('says what was found, the codes, what was left with its uncertainty and rule, and carries proofs that check', async () => {
    const { trim, verify } = await trimAndVerify('CERT-1')
    const pdf = await certificateOf(verify.id)
    expect(pdf.subarray(0, 5).toString()).toBe('%PDF-')
    const codes = trim.result?.format === 'ogee.codes/1' ? trim.result.trim : null
    for (const words of [
      'Unit CERT-1, channel 1',
      '1, released',
      'Releaser',
      '0 V to 10 V, 18 bits, LSB 38.147 µV',
      `${verify.number}, pass 1, as found ${trim.number}`,
      'not recorded',
      String(codes?.codes?.gain),
      String(codes?.words?.gain),
      'at all five codes.',
      'simple acceptance',
      'standard uncertainty, as left',
      `proof-${verify.number}.json`,
      'Changing trim codes moves a live output',
      'Supports, and does not replace, the judgement',
      'Page 1 of 1. Printed 2026-11-26 09:14:00 UTC.',
    ]) {
      expect(text(), words).toContain(words)
    }
    const proofs = filesIn(pdf)
    expect(proofs).toHaveLength(2)
    const crypto = { sha256, verify: verifyEd25519 }
    const ids = proofs.map((proof) => {
      const checked = checkProof(crypto, proof, scene.harness.deps.signer.key)
      if (!checked.ok) throw new Error(checked.message)
      return checked.recordId
    })
    expect(ids).toEqual([verify.id, trim.id])
  })

  it('is the same to the byte for the same facts and time, and no longer with another time', async () => {
    const { verify } = await trimAndVerify('CERT-2')
    await settled()
    const known = await facts(verify.id)
    const first = await renderCertificate(known, at)
    expect((await renderCertificate(known, at)).equals(first)).toBe(true)
    expect((await renderCertificate(known, new Date(at.getTime() + 1_000))).equals(first)).toBe(false)
  })

  it('of a trim takes the verification that followed it, and without one says that it is missing', async () => {
    const { trim, verify } = await trimAndVerify('CERT-3')
    await settled()
    expect((await facts(trim.id)).left?.id).toBe(verify.id)
    const alone = await post(scene.url, scene.station, trimBody({ unit: 'CERT-4' }))
    await certificateOf(alone.id)
    expect(text()).toContain('No measurement as left is recorded.')
    expect(text()).toContain('a prediction is no verification.')
    await post(scene.url, scene.engineer, {
      kind: 'withdraw',
      design: 'U18',
      unit: 'CERT-3',
      follows: verify.id,
      reason: 'The probe was loose.',
    })
    expect((await facts(trim.id)).left).toBeNull()
  })

  it('out of reach gives no codes; a withdrawn record, a finding and an override are told on it', async () => {
    const out = await post(
      scene.url,
      scene.station,
      trimBody({ unit: 'CERT-5', points: pointsOf({ gainPpm: -5_000 }) }),
    )
    await certificateOf(out.id)
    expect(text()).toContain('out of reach')
    expect(text()).toContain('no codes')
    said = []
    const suspect = await post(
      scene.url,
      scene.station,
      trimBody({ unit: 'CERT-6', points: suspectPoints() }),
    )
    const reason = 'Measured twice with the same bow.'
    await post(scene.url, scene.engineer, {
      kind: 'override',
      design: 'U18',
      unit: 'CERT-6',
      follows: suspect.id,
      reason,
    })
    await certificateOf(suspect.id)
    expect(text()).toContain('Test engineer')
    expect(text()).toContain(reason)
    const override = (await facts(suspect.id)).notices[0]!.record!
    const takeBack = {
      kind: 'withdraw',
      design: 'U18',
      unit: 'CERT-6',
      follows: override,
      reason: 'Seen too soon.',
    }
    await post(scene.url, scene.engineer, takeBack)
    await settled()
    expect(await facts(suspect.id)).toMatchObject({ override: null, notices: [] })
    said = []
    const body = {
      kind: 'withdraw',
      design: 'U18',
      unit: 'CERT-5',
      follows: out.id,
      reason: 'Wrong unit on the bench.',
    }
    await post(scene.url, scene.engineer, body)
    await certificateOf(out.id)
    expect(text()).toContain('was withdrawn by record')
  })

  it('finds the codes behind more than a hundred verifications, in as many queries as behind one', async () => {
    const { trim, verify } = await trimAndVerify('CERT-12')
    let last = verify
    const body = trimBody({ unit: 'CERT-12', kind: 'verify', points: pointsOf({ gainPpm: 0.2 }) })
    for (let i = 0; i < 101; i++) {
      last = await post(scene.url, scene.station, { ...body, follows: last.id })
    }
    await settled()
    // A copy, since the sequencer asks through the same object whenever it likes.
    const sql = { ...scene.harness.database.sql }
    const database = { ...scene.harness.database, sql }
    const rows = vi.spyOn(sql, 'rows')
    const counted = async (id: string) => {
      rows.mockClear()
      const known = await readCertificate(database, id, auditor)
      expect([known.found?.id, known.trim?.id, known.left?.id]).toEqual([trim.id, trim.id, id])
      return rows.mock.calls.length
    }
    const short = await counted(verify.id)
    expect(await counted(last.id)).toBe(short)
    rows.mockClear()
    const stranger = { kind: 'token', scopes: [], station: null, designs: null } as never
    await expect(readCertificate(database, last.id, stranger)).rejects.toMatchObject({ code: 'not-found' })
    expect(rows).toHaveBeenCalledTimes(1)
  })

  it('says so when the revision was released by its author', async () => {
    const { verify } = await trimAndVerify('CERT-7')
    await settled()
    const known = await facts(verify.id)
    await renderCertificate({ ...known, revision: { ...known.revision, releasedByAuthor: true } }, at)
    expect(text()).toContain('The design revision was released by its author.')
  })

  it('prints any serial: what the typeface lacks is told by its code point', async () => {
    const unit = 'Ünït-Ωж-校'
    const trim = await post(scene.url, scene.station, trimBody({ unit }))
    const pdf = await certificateOf(trim.id)
    expect(text()).toContain(unit)
    expect(pdf.length).toBeGreaterThan(10_000)
  })

  it('of the longest measurement stays a document: its first codes are printed, all are attached', async () => {
    const points = Array.from({ length: 4_096 }, (_, i) => ({
      code: i * 64,
      measured: i * 64 * (10 / 2 ** 18),
      uncertainty: 5e-6,
    }))
    const trim = await post(scene.url, scene.station, trimBody({ unit: 'CERT-8', points }))
    const pdf = await certificateOf(trim.id)
    expect(text()).toContain('The first 300 of 4096 codes; all stand in the attached records.')
    const [proof] = filesIn(pdf)
    const record = JSON.parse(Buffer.from(proof!.record, 'base64').toString('utf8')) as TrimRecord
    expect(record.points).toHaveLength(4_096)
  })
})

describe('GET /trims/:id/certificate', () => {
  it('gives a file by name, to those who may see every record on it', async () => {
    const { verify } = await trimAndVerify('CERT-9')
    await settled()
    const get = (as: object) => api(scene.url, 'get', `/trims/${verify.id}/certificate`, as)
    const reply = await get(scene.station)
    expect(reply.status).toBe(200)
    expect(reply.headers['content-type']).toBe('application/pdf')
    expect(reply.headers['content-disposition']).toContain(
      `attachment; filename="certificate CERT-9 channel 1 record ${verify.number}.pdf"`,
    )
    expect((await get(scene.other)).status).toBe(404)
    expect((await get({})).status).toBe(401)
  })

  it('shows a station nothing of a story that another station began', async () => {
    const first = await post(scene.url, scene.station, trimBody({ unit: 'CERT-10' }))
    const points = pointsOf({ gainPpm: 0.2 })
    const verify = await post(scene.url, scene.other, trimBody({ unit: 'CERT-10', kind: 'verify', points }))
    expect(verify.follows).toBe(first.id)
    await settled()
    const status = async (as: object) =>
      (await api(scene.url, 'get', `/trims/${verify.id}/certificate`, as)).status
    expect([await status(scene.other), await status(scene.engineer)]).toEqual([404, 200])
  })

  it('waits for the ledger: before the record has its place there is nothing to attach', async () => {
    const trim = await post(scene.url, scene.station, trimBody({ unit: 'CERT-11' }))
    const replies = [await api(scene.url, 'get', `/trims/${trim.id}/certificate`, scene.station)]
    expect([200, 409]).toContain(replies[0]!.status)
    if (replies[0]!.status === 409) expect(replies[0]!.body.code).toBe('not-in-ledger-yet')
    await settled()
    expect((await api(scene.url, 'get', `/trims/${trim.id}/certificate`, scene.station)).status).toBe(200)
  })
})
