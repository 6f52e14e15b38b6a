import { describe, expect, it } from 'vitest'
import { type BatchLine, recordBatch } from '../../server/commands/record-batch.ts'
import type { Asked, Recorded } from '../../server/commands/recorder.ts'
import type { Principal } from '../../server/http/principal.ts'
import { recordRequest } from '../../shared/contract/record.ts'
import { OgeeError } from '../../shared/errors.ts'
import { limits } from '../../shared/limits.ts'
import { trimBody } from '../support/server-factories.ts'

const principalNow = async () => ({ kind: 'person', name: 'x' }) as Principal

function line(number: number, change: object): BatchLine {
  const body = trimBody({ ...change })
  const key = `k-${number}`
  return { line: number, key, asked: { request: recordRequest.parse(body), rawBody: body, key } }
}

/** Runs a block whose every record ends only when nothing more begins, the newest first: the worst order there is. */
async function run(lines: readonly BatchLine[], failing: Record<string, Error> = {}) {
  const begun: string[][] = []
  const ended: string[] = []
  let open: { key: string; end: () => void }[] = []
  const record = ({ key }: Asked) =>
    new Promise<Recorded>((resolve, reject) => {
      if (open.length === 0) {
        begun.push([])
        setImmediate(() => {
          const all = open.reverse()
          open = []
          for (const one of all) one.end()
        })
      }
      begun.at(-1)!.push(key)
      const end = () => {
        ended.push(key)
        if (failing[key]) reject(failing[key])
        else resolve({ record: { text: '' } as Recorded['record'], replayed: false })
      }
      open.push({ key, end })
    })
  const outcomes = []
  for await (const some of recordBatch({ record, principalNow }, lines)) outcomes.push(...some)
  return { begun, ended, outcomes }
}

describe('lines of one place in a block', () => {
  it('begin only after those before them ended; other places are under way at once', async () => {
    const { begun, outcomes } = await run([
      line(1, { unit: 'A', channel: 'a', range: 'u5' }),
      line(2, { unit: 'B', channel: 'a', range: 'u5' }),
      line(3, { unit: 'A', channel: 'a', range: 'u5', kind: 'verify' }),
      line(4, { unit: 'A', channel: 'b', range: 'u5' }),
      line(5, { unit: 'A', channel: 'a', range: 'u10' }),
      line(6, { unit: 'A', channel: 'a', range: 'u5', design: 'OTHER' }),
      line(7, { unit: 'B', kind: 'verify' }),
      line(8, { unit: 'A', channel: 'a', range: 'u5' }),
    ])
    expect(begun.map((keys) => new Set(keys))).toEqual([
      new Set(['k-1', 'k-2', 'k-4', 'k-5', 'k-6']),
      new Set(['k-3', 'k-7']),
      new Set(['k-8']),
    ])
    expect(outcomes.map((one) => one.line)).toEqual([1, 2, 3, 4, 5, 6, 7, 8])
  })

  it('of long sweeps go fewer at a time, so that what they write fits a statement', async () => {
    const points = Array.from({ length: limits.pointsMax }, (_, code) => ({ code, measured: code * 1e-5 }))
    const { begun } = await run([1, 2, 3].map((n) => line(n, { unit: `U-${n}`, points })))
    expect(begun).toEqual([['k-1', 'k-2'], ['k-3']])
  })

  it('go on after a refusal, and are not tried after an outage', async () => {
    const lines = [line(1, { unit: 'A' }), line(2, { unit: 'A', kind: 'verify' }), line(3, { unit: 'B' })]
    const refused = await run(lines, { 'k-1': new OgeeError('too-few-codes', 'Too few.') })
    expect(refused.ended).toEqual(['k-3', 'k-1', 'k-2'])
    const outage = new OgeeError('database-unavailable', 'Gone.')
    const out = await run(lines, { 'k-1': outage })
    expect(out.ended).toEqual(['k-3', 'k-1'])
    expect(out.outcomes[1]).toMatchObject({ line: 2, recorded: null, error: outage })
  })
})
