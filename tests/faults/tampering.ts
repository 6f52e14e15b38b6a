import { createHash } from 'node:crypto'
import type { Connection } from 'mariadb'
import type { Signer } from '../../server/ledger/signer.ts'
import type { LedgerFault } from '../../shared/ledger/check/faults.ts'
import { signCheckpoint } from '../../shared/ledger/checkpoint.ts'
import { leafBytes, leafHash } from '../../shared/ledger/leaf.ts'
import { appendLeaves, rootOf } from '../../shared/ledger/tree.ts'
import type { Random } from '../support/random.ts'

/** What somebody with the root account of the database can do to what is recorded, and what finds it. */

const sha256 = (bytes: Uint8Array) => createHash('sha256').update(bytes).digest()

export type Table =
  | 'records'
  | 'ledger_leaves'
  | 'ledger_entries'
  | 'ledger_nodes'
  | 'ledger_checkpoints'
  | 'ledger_keys'
  | 'design_documents'
  | 'findings'
  | 'finding_answers'
  | 'lot_sign_offs'
  | 'ledger_head'

export type Entry = { idx: number; leafId: number; kind: string; record: string | null }
export type Held = { entries: readonly Entry[]; checkpoints: readonly { number: number; size: number }[] }

export type Tampering = {
  name: string
  /** Tables to put back afterwards. */
  touches: readonly Table[]
  /** Does it, and says which first fault is right, and over how many entries a kept checkpoint must be to show it. */
  act: (world: World) => Promise<{ what: string; right: (first: LedgerFault) => boolean; keptOver?: number }>
}

export type World = { root: Connection; random: Random; held: Held; signer: Signer }

const at =
  (what: LedgerFault['what'] | readonly LedgerFault['what'][], entry: number) => (fault: LedgerFault) =>
    [what].flat().includes(fault.what) &&
    fault.entry !== null &&
    fault.entry <= entry &&
    (fault.to ?? fault.entry) >= entry
const about = (what: LedgerFault['what'], words: string) => (fault: LedgerFault) =>
  fault.what === what && fault.message.includes(words)

const anyEntry = ({ held, random }: World, kind?: string) =>
  random.pick(held.entries.filter((entry) => kind === undefined || entry.kind === kind))

function flipped(bytes: Buffer, random: Random): Buffer {
  const copy = Buffer.from(bytes)
  const place = random.below(copy.length)
  copy[place] = copy[place]! ^ (1 << random.below(8))
  return copy
}

async function cell(root: Connection, table: string, column: string, where: string, values: unknown[]) {
  const [row] = await root.query<Record<string, unknown>[]>(
    `SELECT ${column} AS value FROM ${table} WHERE ${where}`,
    values,
  )
  return row!.value
}

const flipCell = async (
  { root, random }: World,
  table: string,
  column: string,
  where: string,
  values: unknown[],
) => {
  const old = (await cell(root, table, column, where, values)) as Buffer
  await root.query(`UPDATE ${table} SET ${column} = ? WHERE ${where}`, [flipped(old, random), ...values])
}

const leafFlip = (column: 'body' | 'hash'): Tampering => ({
  name: `flip a bit of a leaf's ${column}`,
  touches: ['ledger_leaves'],
  act: async (world) => {
    const { idx, leafId } = anyEntry(world)
    await flipCell(world, 'ledger_leaves', column, 'id = ?', [leafId])
    return { what: `leaf ${leafId}`, right: at('hash', idx) }
  },
})

const leafWords: Tampering = {
  name: "change a leaf's kind or time",
  touches: ['ledger_leaves'],
  act: async (world) => {
    const { idx, leafId, kind } = anyEntry(world)
    const set = world.random.pick([
      `kind = '${kind === 'record' ? 'finding' : 'record'}'`,
      'at = at + INTERVAL 1000 MICROSECOND',
    ])
    await world.root.query(`UPDATE ledger_leaves SET ${set} WHERE id = ?`, [leafId])
    return { what: `${set} of entry ${idx}`, right: at('hash', idx) }
  },
}

const recordColumns: Record<string, string> = {
  id: "'01890a5d-0000-7000-8000-000000000000'",
  number: 'number + 1000000',
  kind: "IF(kind = 'trim', 'verify', 'trim')",
  unit: "CONCAT(unit, 'x')",
  unit_id: 'IF(unit_id = 1, 2, 1)',
  channel: "CONCAT(channel, 'x')",
  range_id: "CONCAT(range_id, 'x')",
  lot: "IF(lot IS NULL, 'L1', NULL)",
  design: "CONCAT(design, 'X')",
  revision: 'revision + 1',
  pass: 'pass + 1',
  follows: 'IF(follows IS NULL, id, NULL)',
  verdict: "IF(verdict = 'ok', 'suspect', 'ok')",
  accepted: '1 - accepted',
  gain_error_ppm: 'COALESCE(gain_error_ppm, 0) + 1e-3',
  offset_error_v: 'COALESCE(offset_error_v, 0) + 1e-9',
  gain_code: 'COALESCE(gain_code, 0) + 1',
  offset_code: 'COALESCE(offset_code, 0) + 1',
  worst_lsb: 'COALESCE(worst_lsb, 0) - 0.1',
  by_name: "CONCAT(by_name, '.')",
  by_id: "'AAAAAAAA'",
  station_id: "'01890a5d-0000-7000-8000-000000000000'",
  station: "CONCAT(station, 'x')",
  measured_at: 'IF(measured_at IS NULL, recorded_at, measured_at + INTERVAL 1 SECOND)',
  recorded_at: 'recorded_at - INTERVAL 1 DAY',
  receipt_key: "CONCAT(receipt_key, '0')",
  notices: `IF(notices = '[]', '[{"code":"clock-skew","message":"x"}]', '[]')`,
}

const recordColumn: Tampering = {
  name: 'change a column of a record',
  touches: ['records'],
  act: async (world) => {
    const { idx, record } = anyEntry(world, 'record')
    const column = world.random.pick([...Object.keys(recordColumns), 'receipt_signature'])
    if (column === 'receipt_signature') await flipCell(world, 'records', column, 'id = ?', [record])
    else
      await world.root.query(`UPDATE records SET ${column} = ${recordColumns[column]} WHERE id = ?`, [record])
    const isPlace = column === 'unit_id' || column === 'station_id'
    return {
      what: `${column} of entry ${idx}`,
      right: isPlace
        ? (fault) => fault.what === 'stray' && fault.record === record
        : at(['row', 'receipt'], idx),
    }
  },
}

const nodeFlip: Tampering = {
  name: 'flip a bit of a stored hash of the tree',
  touches: ['ledger_nodes'],
  act: async (world) => {
    const nodes = await world.root.query<{ level: number; idx: bigint }[]>(
      'SELECT level, idx FROM ledger_nodes',
    )
    const { level, idx } = world.random.pick(nodes)
    await flipCell(world, 'ledger_nodes', 'hash', 'level = ? AND idx = ?', [level, idx])
    return { what: `node ${level}/${idx}`, right: at('tree', (Number(idx) + 1) * 2 ** level - 1) }
  },
}

const checkpointChange: Tampering = {
  name: 'change a checkpoint',
  touches: ['ledger_checkpoints'],
  act: async (world) => {
    const { number } = world.random.pick(world.held.checkpoints)
    const set = world.random.pick([
      'size = size + 1',
      "note = REPLACE(note, 'ledger', 'edger')",
      'number = number + 5000',
      '',
    ])
    if (set === '') await flipCell(world, 'ledger_checkpoints', 'root', 'number = ?', [number])
    else await world.root.query(`UPDATE ledger_checkpoints SET ${set} WHERE number = ?`, [number])
    return {
      what: `checkpoint ${number}, ${set || 'root'}`,
      right: ({ what, message }) => what === 'checkpoint' && /heckpoint (\d+)/.test(message),
    }
  },
}

const keyChange: Tampering = {
  name: 'change the table of keys',
  touches: ['ledger_keys'],
  act: async (world) => {
    const set = world.random.pick(["name = 'other/ledger'", 'at = at + INTERVAL 1 SECOND', 'number = 2', ''])
    if (set === '') await flipCell(world, 'ledger_keys', 'public_key', 'number = 1', [])
    else await world.root.query(`UPDATE ledger_keys SET ${set}`)
    return { what: set || 'public_key', right: ({ what }) => what === 'key' }
  },
}

const documentChange: Tampering = {
  name: 'change or remove the bytes of a released revision',
  touches: ['design_documents'],
  act: async (world) => {
    const { idx, leafId } = anyEntry(world, 'release')
    const body = JSON.parse(String(await cell(world.root, 'ledger_leaves', 'body', 'id = ?', [leafId]))) as {
      hash: string
    }
    const hash = Buffer.from(body.hash, 'hex')
    const how = world.random.pick(['bytes', 'hash', 'delete'] as const)
    if (how === 'delete') await world.root.query('DELETE FROM design_documents WHERE hash = ?', [hash])
    else await flipCell(world, 'design_documents', how, 'hash = ?', [hash])
    return { what: how, right: at('document', idx) }
  },
}

const removal: Tampering = {
  name: 'remove one row',
  touches: [
    'records',
    'ledger_leaves',
    'ledger_entries',
    'ledger_nodes',
    'ledger_checkpoints',
    'ledger_keys',
  ],
  act: async (world) => {
    const { root, random, held } = world
    const table = random.pick([
      'records',
      'ledger_leaves',
      'ledger_entries',
      'ledger_nodes',
      'ledger_checkpoints',
      'ledger_keys',
    ])
    const entry = anyEntry(world, table === 'records' ? 'record' : undefined)
    const { idx, leafId } = entry
    switch (table) {
      case 'records':
        await root.query('DELETE FROM records WHERE leaf_id = ?', [leafId])
        return { what: `record of ${idx}`, right: at('row-missing', idx) }
      case 'ledger_leaves':
        await root.query('DELETE FROM ledger_leaves WHERE id = ?', [leafId])
        return { what: `leaf of ${idx}`, right: at('leaf-missing', idx) }
      case 'ledger_entries':
        await root.query('DELETE FROM ledger_entries WHERE idx = ?', [idx])
        return { what: `entry ${idx}`, right: at(['entry-missing', 'cut'], idx) }
      case 'ledger_nodes':
        await root.query('DELETE FROM ledger_nodes WHERE level = 0 AND idx = ?', [idx])
        return { what: `node of ${idx}`, right: at('tree', idx) }
      case 'ledger_keys':
        await root.query('DELETE FROM ledger_keys')
        return {
          what: 'key',
          right: ({ what }) => what === 'key' || what === 'receipt' || what === 'checkpoint',
        }
      default: {
        const { number } = random.pick(held.checkpoints)
        await root.query('DELETE FROM ledger_checkpoints WHERE number = ?', [number])
        const isLast = number === held.checkpoints.at(-1)!.number
        return {
          what: `checkpoint ${number}`,
          right: isLast
            ? about('stray', `number ${number}`)
            : about('checkpoint', `Checkpoint ${number} is missing`),
        }
      }
    }
  },
}

const insertion: Tampering = {
  name: 'put a row in',
  touches: ['records', 'ledger_leaves', 'ledger_entries', 'ledger_nodes', 'ledger_checkpoints'],
  act: async (world) => {
    const { root, random, held } = world
    const { leafId } = anyEntry(world, 'record')
    const size = held.entries.length
    const forged = '01890a5d-0000-7000-8000-00000000f0f0'
    const newLeaf = `INSERT INTO ledger_leaves (id, kind, at, hash, body) SELECT 900000, kind, at, UNHEX(SHA2(CONCAT('x', body), 256)),
      CONCAT(body, ' ') FROM ledger_leaves WHERE id = ?`
    const copy = (leaf: string) =>
      `INSERT INTO records SELECT * FROM (SELECT ${recordCopy(forged, leaf)} FROM records WHERE leaf_id = ?) copied`
    switch (random.below(6)) {
      case 0:
        await root.query(newLeaf, [leafId])
        return { what: 'leaf', right: about('stray', 'Leaf 900000') }
      case 1:
        await root.query(newLeaf, [leafId])
        await root.query(
          copy('900000').replace('INSERT INTO records', `INSERT INTO records (${recordNames})`),
          [leafId],
        )
        return { what: 'record with leaf', right: ({ record }) => record === forged }
      case 2:
        await root.query(
          copy('900001').replace('INSERT INTO records', `INSERT INTO records (${recordNames})`),
          [leafId],
        )
        return { what: 'record without leaf', right: ({ record }) => record === forged }
      case 3:
        await root.query(newLeaf, [leafId])
        await root.query('INSERT INTO ledger_entries VALUES (?, 900000)', [size])
        return { what: 'entry', right: at('hash', size) }
      case 4:
        await root.query("INSERT INTO ledger_nodes VALUES (3, 100000, REPEAT('x', 32))")
        return { what: 'node', right: about('stray', 'level 3, index 100000') }
      default: {
        const { number } = held.checkpoints.at(-1)!
        await root.query(
          `INSERT INTO ledger_checkpoints SELECT number + 1, size + 1, root, at, note FROM ledger_checkpoints WHERE number = ?`,
          [number],
        )
        return { what: 'checkpoint', right: about('checkpoint', `Checkpoint ${number + 1}`) }
      }
    }
  },
}

const statementColumns: Record<string, Record<string, string>> = {
  findings: {
    record_id: 'NULL',
    lot: "'L9'",
    design: "'TWO'",
    by_id: 'id',
    at: 'at + INTERVAL 1 SECOND',
  },
  finding_answers: {
    by_id: 'id',
    finding_id: 'id',
    closes: 'IF(closes IS NULL, id, NULL)',
    at: 'at - INTERVAL 1 DAY',
  },
  lot_sign_offs: { by_name: "'Nobody'", at: 'at + INTERVAL 1 SECOND', lot_id: 'lot_id + 900', leaf_id: '1' },
}

const statementRow: Tampering = {
  name: 'change or remove a row of a finding, an answer or a sign-off',
  touches: ['findings', 'finding_answers', 'lot_sign_offs'],
  act: async ({ root, random }) => {
    const table = random.pick(Object.keys(statementColumns))
    const leaves = await root.query<{ id: bigint }[]>(`SELECT leaf_id AS id FROM ${table}`)
    const { id } = random.pick(leaves)
    const columns = Object.entries(statementColumns[table]!)
    const [column, value] = random.pick([...columns, ['', ''] as const])
    if (column === '') await root.query(`DELETE FROM ${table} WHERE leaf_id = ?`, [id])
    else {
      // A finding on a lot names no record, and so on: what would change nothing is no tampering.
      const { affectedRows } = await root.query<{ affectedRows: number }>(
        `UPDATE ${table} SET ${column} = ${value} WHERE leaf_id = ? AND NOT (${column} <=> ${value})`,
        [id],
      )
      if (affectedRows === 0) await root.query(`DELETE FROM ${table} WHERE leaf_id = ?`, [id])
    }
    return { what: `${table} ${column || 'row'} of leaf ${id}`, right: about('stray', table) }
  },
}

/** Filled by the test from the table itself, generated columns left out. */
let recordNames = ''
export function knowRecordColumns(names: readonly string[]): void {
  recordNames = names.join(', ')
}
const recordCopy = (id: string, leaf: string) =>
  recordNames
    .split(', ')
    .map((name) =>
      name === 'id' ? `'${id}'` : name === 'number' ? 'number + 5000000' : name === 'leaf_id' ? leaf : name,
    )
    .map((expression, i) => `${expression} AS c${i}`)
    .join(', ')

const swap: Tampering = {
  name: 'swap two rows',
  touches: ['records', 'ledger_leaves', 'ledger_entries', 'ledger_nodes'],
  act: async (world) => {
    const { root, random } = world
    const [a, b] = twoRecords(world)
    const what = random.pick(['bodies', 'entries', 'records', 'nodes'] as const)
    const exchange = async (
      table: string,
      key: string,
      column: string,
      ids: [unknown, unknown],
      spare: string,
    ) => {
      const first = await cell(root, table, column, `${key} = ?`, [ids[0]])
      const second = await cell(root, table, column, `${key} = ?`, [ids[1]])
      await root.query(`UPDATE ${table} SET ${column} = ${spare} WHERE ${key} = ?`, [ids[0]])
      await root.query(`UPDATE ${table} SET ${column} = ? WHERE ${key} = ?`, [first, ids[1]])
      await root.query(`UPDATE ${table} SET ${column} = ? WHERE ${key} = ?`, [second, ids[0]])
    }
    const first = Math.min(a.idx, b.idx)
    if (what === 'bodies') await exchange('ledger_leaves', 'id', 'body', [a.leafId, b.leafId], "''")
    if (what === 'entries') await exchange('ledger_entries', 'idx', 'leaf_id', [a.idx, b.idx], '0')
    if (what === 'records') await exchange('records', 'id', 'leaf_id', [a.record, b.record], '0')
    if (what === 'nodes')
      await exchange('ledger_nodes', 'level = 0 AND idx', 'hash', [a.idx, b.idx], "REPEAT('x', 32)")
    const faults = { bodies: 'hash', entries: 'tree', records: 'row', nodes: 'tree' } as const
    return { what: `${what} of ${a.idx} and ${b.idx}`, right: at(faults[what], first) }
  },
}

function twoRecords(world: World): [Entry, Entry] {
  const a = anyEntry(world, 'record')
  const b = anyEntry(world, 'record')
  return a.idx === b.idx ? twoRecords(world) : [a, b]
}

/** Everything from an entry on is gone, and all that stands beside it agrees. */
async function cutFrom({ root }: World, size: number): Promise<void> {
  await root.query(
    'DELETE r FROM records r JOIN ledger_entries e ON e.leaf_id = r.leaf_id WHERE e.idx >= ?',
    [size],
  )
  await root.query(
    'DELETE l FROM ledger_leaves l JOIN ledger_entries e ON e.leaf_id = l.id WHERE e.idx >= ?',
    [size],
  )
  await root.query('DELETE FROM ledger_entries WHERE idx >= ?', [size])
  await root.query('DELETE FROM ledger_checkpoints WHERE size > ?', [size])
  await rebuild(root)
}

/** Nodes and head as they would be, had the leaves always been those that are there. */
async function rebuild(root: Connection): Promise<void> {
  const rows = await root.query<{ hash: Buffer }[]>(
    'SELECT l.hash FROM ledger_entries e JOIN ledger_leaves l ON l.id = e.leaf_id ORDER BY e.idx',
  )
  const { added, peaks, size } = appendLeaves(
    sha256,
    0,
    [],
    rows.map((row) => row.hash),
  )
  await root.query('DELETE FROM ledger_nodes')
  await root.batch(
    'INSERT INTO ledger_nodes (level, idx, hash) VALUES (?, ?, ?)',
    added.map((node) => [node.level, node.index, Buffer.from(node.hash)]),
  )
  await root.query(
    `UPDATE ledger_head SET size = ?, root = ?, checkpoint_number = (SELECT MAX(number) FROM ledger_checkpoints),
      checkpoint_size = (SELECT MAX(size) FROM ledger_checkpoints)`,
    [size, Buffer.from(rootOf(sha256, peaks))],
  )
}

/** The server signs whatever head it finds: so does whoever rewrites what lies under it. */
async function signHead({ root, signer }: World): Promise<void> {
  const [head] = await root.query<{ size: bigint; root: Buffer }[]>('SELECT size, root FROM ledger_head')
  const checkpoint = { origin: signer.key.name, size: Number(head!.size), root: head!.root }
  const note = signCheckpoint(sha256, checkpoint, signer.key, signer.sign)
  await root.query(
    `INSERT INTO ledger_checkpoints (number, size, root, at, note)
      SELECT checkpoint_number + 1, size, root, NOW(3), ? FROM ledger_head`,
    [note],
  )
  await root.query('UPDATE ledger_head SET checkpoint_number = checkpoint_number + 1, checkpoint_size = size')
}

const everything = [
  'records',
  'ledger_leaves',
  'ledger_entries',
  'ledger_nodes',
  'ledger_checkpoints',
  'ledger_head',
] as const

const cut: Tampering = {
  name: 'cut the tail, or put an old backup back',
  touches: everything,
  act: async (world) => {
    const size = 40 + world.random.below(world.held.entries.length - 41)
    if (world.random.below(2) === 0) {
      await world.root.query('DELETE FROM ledger_entries WHERE idx >= ?', [size])
      return { what: `entries from ${size}`, right: at('cut', size) }
    }
    await cutFrom(world, size)
    return { what: `all from ${size}, as in an old backup`, right: at('cut', size), keptOver: size + 1 }
  },
}

const fork: Tampering = {
  name: 'fork: an old backup, and another history after it',
  touches: everything,
  act: async (world) => {
    const { root, held, random } = world
    const total = held.entries.length
    const size = 40 + random.below(total - 41)
    await cutFrom(world, size)
    const body = Buffer.from(
      String(await cell(root, 'ledger_leaves', 'body', 'id = ?', [held.entries[0]!.leafId])),
    )
    const rows = Array.from({ length: total - size + random.below(20) }, (_, i) => {
      const time = new Date(Date.UTC(2026, 5, 1, 0, 0, 0, i))
      const hash = leafHash(sha256, leafBytes('token', time.toISOString(), body))
      return [
        910_000 + i,
        'token',
        time.toISOString().slice(0, 23).replace('T', ' '),
        Buffer.from(hash),
        body,
      ]
    })
    await root.batch('INSERT INTO ledger_leaves (id, kind, at, hash, body) VALUES (?, ?, ?, ?, ?)', rows)
    await root.batch(
      'INSERT INTO ledger_entries VALUES (?, ?)',
      rows.map(([id], i) => [size + i, id]),
    )
    await rebuild(root)
    await signHead(world)
    return { what: `from ${size}`, right: at('root', size), keptOver: size + 1 }
  },
}

const rewriting: Tampering = {
  name: 'change a leaf and everything computed from it',
  touches: everything,
  act: async (world) => {
    const { root, random } = world
    const { idx, leafId, kind } = anyEntry(world, random.pick(['record', undefined]))
    const text = String(await cell(root, 'ledger_leaves', 'body', 'id = ?', [leafId]))
    const body = Buffer.from(text.replace(/(\d)(?=\D*$)/, (digit) => String((Number(digit) + 1) % 10)))
    const [row] = await root.query<{ at: Date }[]>('SELECT at FROM ledger_leaves WHERE id = ?', [leafId])
    const hash = leafHash(sha256, leafBytes(kind as 'record', row!.at.toISOString(), body))
    await root.query('UPDATE ledger_leaves SET body = ?, hash = ? WHERE id = ?', [
      body,
      Buffer.from(hash),
      leafId,
    ])
    const signsAnew = random.below(2) === 0
    if (signsAnew) await root.query('DELETE FROM ledger_checkpoints WHERE size > ?', [idx])
    await rebuild(root)
    if (signsAnew) await signHead(world)
    return {
      what: `entry ${idx}${signsAnew ? ', signed anew' : ''}`,
      right: at(['row', 'receipt', 'root', 'document', 'hash'], idx),
      ...(signsAnew ? { keptOver: idx + 1 } : {}),
    }
  },
}

export const tamperings: readonly Tampering[] = [
  leafFlip('body'),
  leafFlip('hash'),
  leafWords,
  recordColumn,
  recordColumn,
  nodeFlip,
  checkpointChange,
  keyChange,
  documentChange,
  removal,
  removal,
  insertion,
  swap,
  cut,
  fork,
  rewriting,
  statementRow,
]
