import { setTimeout as sleep } from 'node:timers/promises'
import type { RecordBody } from '../../shared/contract/record.ts'
import type { Random } from '../support/random.ts'

/** What a station holds after a delivery was acknowledged. */
export type Acknowledged = { key: string; unit: string; id: string; leaf: string; canonical: string }

export type Delivery = { key: string; unit: string; body: string }

/** One invented unit of DBS-A: hidden gain and offset, five readings. Keys of a round share a start, so that it can be checked apart. */
export function delivery(index: number, random: Random, round = 0): Delivery {
  const gain = (random.next() - 0.5) * 4e-4
  const offset = (random.next() - 0.5) * 2e-5
  const points = [0, 65536, 131072, 196608, 262143].map((code) => {
    const ideal = (10 * code) / 262144
    return { code, measured: ideal + offset + gain * ideal + (random.next() - 0.5) * 2e-6 }
  })
  const unit = `F-${round}-${String(index).padStart(7, '0')}`
  return {
    key: `fault-${round}-${index}`,
    unit,
    body: JSON.stringify({ design: 'DBS-A', unit, channel: '1', applied: 'neutral', points }),
  }
}

/**
 * Posts until it is acknowledged, as a station would: again after a lost answer, 409, 429 and 503, always with the same key.
 * Gives up only on an answer that no retry could change, which is a failure of the test.
 */
export async function deliver(
  urlOf: () => string,
  token: string,
  { key, unit, body }: Delivery,
): Promise<Acknowledged> {
  const since = Date.now()
  for (let attempt = 0; Date.now() - since < patienceMs; attempt += 1) {
    try {
      const response = await fetch(`${urlOf()}/api/v1/trims`, {
        method: 'POST',
        headers: {
          authorization: `Bearer ${token}`,
          'content-type': 'application/json',
          'idempotency-key': key,
          // A connection for each delivery, so that each has a fate of its own.
          connection: 'close',
        },
        body,
        signal: AbortSignal.timeout(5000),
      })
      const text = await response.text()
      if (response.status === 201) return acknowledged(key, unit, text)
      if (![409, 429, 503].includes(response.status)) throw new Refused(`${key}: ${response.status} ${text}`)
    } catch (error) {
      if (error instanceof Refused) throw error
    }
    await sleep(Math.min(10 * (attempt + 1), 100))
  }
  throw new Error(`${key}: not acknowledged in three minutes`)
}

/** A guard against hanging: on a busy machine database and server take long to be there again. */
const patienceMs = 180_000

class Refused extends Error {}

/** What an answer of 201 says, apart from what may change around it. */
export function acknowledged(key: string, unit: string, text: string): Acknowledged {
  const {
    notices: _,
    ledger: __,
    receipt,
    ...body
  } = JSON.parse(text) as RecordBody & {
    notices: unknown
    ledger: unknown
    receipt: { leaf: string }
  }
  return { key, unit, id: body.id, leaf: receipt.leaf, canonical: JSON.stringify(body) }
}
