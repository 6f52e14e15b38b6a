import type { Connection } from 'mariadb'
import type { RecordBody } from '../../../shared/contract/record.ts'
import { canonicalText } from '../../../shared/ledger/canonical.ts'

/** What changes from one filled record to the next; everything else is a real record of the demo, computed by the solver. */
export type Slots = {
  id: string
  number: number
  unit: string
  lot: string
  by: string
  station: string
  recordedAt: string
  measuredAt: string
  follows: string
}

/** A real record, taken apart at its slots. */
export type RecordTemplate = {
  body: RecordBody
  text: (slots: Slots) => string
  /** Which earlier record of its story it follows; null where a chain starts. */
  follows: number | null
}

/** What was recorded of one unit, in order, and how each of its channels stood in the end. */
export type StoryTemplate = {
  design: string
  records: RecordTemplate[]
  states: { channel: string; range: string; text: (of: (record: number) => Slots) => string }[]
}

const slotNames = [
  'id',
  'number',
  'unit',
  'lot',
  'by',
  'station',
  'recordedAt',
  'measuredAt',
  'follows',
] as const
const mark = (name: string) => `\u0001${name}\u0001`

/** Of one record, by P5. */
const mostBytes = 4_096

/** Every unit of the demo whose records are not too large, as a story that can be told again of another unit. */
export async function readStories(root: Connection): Promise<StoryTemplate[]> {
  const rows = await root.query<{ unitId: bigint; body: Buffer }[]>(
    `SELECT r.unit_id AS unitId, l.body FROM records r JOIN ledger_leaves l ON l.id = r.leaf_id
      ORDER BY r.unit_id, r.recorded_at, r.id`,
  )
  const units = new Map<bigint, RecordBody[]>()
  for (const { unitId, body } of rows) {
    const list = units.get(unitId) ?? []
    list.push(JSON.parse(body.toString('utf8')) as RecordBody)
    units.set(unitId, list)
  }
  const states = await root.query<{ unitId: bigint; channel: string; range: string; state: string }[]>(
    'SELECT unit_id AS unitId, channel, range_id AS `range`, state FROM unit_codes',
  )
  const small = [...units].filter(([, bodies]) =>
    bodies.every((body) => canonicalText(body as never).length < mostBytes),
  )
  return small.map(([unitId, bodies]) => ({
    design: bodies[0]!.design,
    records: bodies.map((body) => templateOf(body, bodies)),
    states: states
      .filter((state) => state.unitId === unitId)
      .map(({ channel, range, state }) => ({ channel, range, text: stateOf(state, bodies) })),
  }))
}

export function templateOf(body: RecordBody, story: readonly RecordBody[]): RecordTemplate {
  const follows = body.follows === null ? null : story.findIndex(({ id }) => id === body.follows)
  const marked = {
    ...body,
    ...Object.fromEntries(slotNames.map((name) => [name, mark(name)])),
    follows: follows === null ? null : mark('follows'),
  }
  const pieces = canonicalText(marked as never).split(/"\\u0001(\w+)\\u0001"/)
  const text = (slots: Slots) => {
    let made = pieces[0]!
    for (let i = 1; i < pieces.length; i += 2) {
      const value = slots[pieces[i] as keyof Slots]
      const raw = typeof value === 'number' || pieces[i] === 'by' || pieces[i] === 'station'
      made += (raw ? value : `"${value}"`) + pieces[i + 1]!
    }
    return made
  }
  return { body, text, follows }
}

/** Ids and times of records inside a place's state, wherever they stand. */
function stateOf(state: string, story: readonly RecordBody[]): StoryTemplate['states'][number]['text'] {
  const named = story.map((body, i) => [i, body] as const).filter(([, body]) => state.includes(body.id))
  return (of) => {
    let text = state
    for (const [i, body] of named) {
      const { id, number, recordedAt } = of(i)
      text = text
        .replaceAll(body.id, id)
        .replaceAll(body.recordedAt, recordedAt)
        .replaceAll(`"number":${body.number},`, `"number":${number},`)
    }
    return text
  }
}
