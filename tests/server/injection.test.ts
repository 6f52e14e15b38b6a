import { afterAll, beforeAll, expect, it } from 'vitest'
import { runSeed, seededRandom } from '../support/random.ts'
import { api, newKey } from '../support/server-client.ts'
import { trimBody } from '../support/server-factories.ts'
import type { Harness } from '../support/server-harness.ts'
import { serverScene } from '../support/server-scene.ts'

let harness: Harness
let url: string
let station: { token: string }

beforeAll(async () => {
  ;({ harness, url, station } = await serverScene())
})
afterAll(() => harness.close())

const pieces = [
  "'",
  '"',
  '`',
  '\\',
  ';',
  '--',
  '/*',
  '*/',
  '#',
  '%',
  '_',
  '?',
  '$1',
  ':x',
  '(',
  ')',
  '=',
  ' OR 1=1 ',
  'UNION SELECT',
  'DROP TABLE units',
  '0x27',
  'é',
  '💡',
  '<b>',
  '{{x}}',
  '{x}',
  '\\x27',
  'NULL',
]

it('ASVS V1.2.4 of 500 texts made of SQL, each is stored, found and told apart like any other text', async () => {
  const seed = runSeed()
  const random = seededRandom(seed)
  const texts = new Set<string>()
  while (texts.size < 500) {
    const text = Array.from({ length: 1 + random.below(5) }, () => random.pick(pieces))
      .join('')
      .trim()
      .slice(0, 60)
      .trim()
    // Half a pair at the cut would be no text.
    if (text !== '' && !/\p{Cs}/u.test(text)) texts.add(text)
  }
  const queue = [...texts]
  const worker = async () => {
    for (let unit = queue.pop(); unit !== undefined; unit = queue.pop()) {
      const made = await api(url, 'post', '/trims', { ...station, key: newKey() }).send(
        trimBody({ unit, conditions: { note: unit } }),
      )
      expect(made.status, `${unit} (seed ${seed}): ${JSON.stringify(made.body)}`).toBe(201)
      const found = await api(url, 'get', `/trims?unit=${encodeURIComponent(unit)}`, station)
      expect(found.body.items, unit).toMatchObject([{ id: made.body.id, unit }])
      const read = await api(url, 'get', `/trims/${made.body.id}`, station)
      expect(read.body.conditions.note).toBe(unit)
    }
  }
  await Promise.all(Array.from({ length: 8 }, worker))
  const [count] = await harness.database.sql.rows<{ n: number }>('SELECT COUNT(*) AS n FROM units')
  expect(count!.n).toBe(500)
})
