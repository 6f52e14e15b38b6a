import { Readable } from 'node:stream'
import type { Connection } from 'mariadb'
import { sha256 } from '../../../server/ledger/crypto.ts'
import type { Signer } from '../../../server/ledger/signer.ts'
import { signCheckpoint } from '../../../shared/ledger/checkpoint.ts'
import { appendLeaves, peakPlaces, rootOf } from '../../../shared/ledger/tree.ts'
import { seededRandom } from '../../support/random.ts'
import { emptyRows, leafColumns, type Maker, recordColumns } from './rows.ts'
import { stepMs, type Teller, tellUnit, type UnitRows } from './stories.ts'
import { readStories } from './templates.ts'

/** Their leaves stay under 16 MB, the largest packet that the connector and the server agree on. */
const recordsABlock = 2_500

export type FillOptions = {
  /** A connection as the database's root, with `permitLocalInfile`; and a second one, so that two loads run side by side. */
  roots: readonly [Connection, Connection]
  signer: Signer
  count: number
  seed: number
  /** When the newest of the filling was recorded. */
  end: Date
  onProgress?: (done: number) => void
}

/**
 * Fills a database that holds the demo, all of it in the ledger, with further records: told from the demo's own, with leaf, place, tree nodes, unit
 * and unit's codes each, and a signed checkpoint at the end. Streamed: memory does not grow with the count. Nobody else may write meanwhile.
 */
export async function fillRecords(options: FillOptions): Promise<void> {
  const { roots, signer, count, end } = options
  const [root, second] = roots
  for (const connection of roots) await connection.query('SET unique_checks = 0, foreign_key_checks = 0')
  const teller = await tellerOf(options, end.getTime() - count * stepMs)
  let tree = await treeOf(root)
  let loading: Promise<unknown> = Promise.resolve()
  for (let done = 0; done < count; ) {
    const rows = emptyRows()
    const unitRows: UnitRows = { units: [], unitCodes: [], lots: new Map() }
    const firstLeaf = teller.next.leafId
    while (rows.records.length < Math.min(recordsABlock, count - done)) tellUnit(teller, rows, unitRows)
    const grown = appendLeaves(sha256, tree.size, tree.peaks, rows.hashes)
    const entries = rows.hashes.map((_, i) => `${tree.size + i}\t${firstLeaf + i}\n`)
    const nodes = grown.added.map(
      ({ level, index, hash }) => `${level}\t${index}\t${Buffer.from(hash).toString('hex')}\n`,
    )
    await loading
    loading = Promise.all([
      load(root, `ledger_leaves CHARACTER SET binary`, leafColumns, rows.leaves),
      (async () => {
        await load(second, 'lots', '(design_id, lot_key, revision, state, created_at)', [
          ...unitRows.lots.values(),
        ])
        await load(second, 'units', '(id, design_id, serial)', unitRows.units)
        await load(second, 'records', recordColumns, rows.records)
        await load(second, 'unit_codes', '(unit_id, channel, range_id, state)', unitRows.unitCodes)
        await load(second, 'ledger_entries', '(idx, leaf_id)', entries)
        await load(second, 'ledger_nodes', '(level, idx, @hash) SET hash = UNHEX(@hash)', nodes)
      })(),
    ])
    tree = { size: grown.size, peaks: grown.peaks as Buffer[] }
    done += rows.records.length
    options.onProgress?.(done)
  }
  await loading
  await closeLedger(root, signer, tree, end)
  await root.query("UPDATE counters SET next = ? WHERE name = 'record-number'", [teller.next.number])
  await root.query('ANALYZE TABLE records, ledger_leaves, units, ledger_entries, ledger_nodes')
}

/** IGNORE only skips lots that an earlier block made: every other key is new by construction, and counted by the caller's checks. */
function load(
  connection: Connection,
  table: string,
  columns: string,
  lines: readonly string[],
): Promise<unknown> {
  const [name, ...charset] = table.split(' ')
  const how = name === 'lots' ? 'IGNORE ' : ''
  return connection.query({
    sql: `LOAD DATA LOCAL INFILE 'rows' ${how}INTO TABLE ${name} ${charset.join(' ') || 'CHARACTER SET utf8mb4'}
      FIELDS TERMINATED BY '\\t' ESCAPED BY '' LINES TERMINATED BY '\\n' ${columns}`,
    infileStreamFactory: () => Readable.from(blocks(lines)),
  })
}

/** Lines in blocks of some hundred kilobytes: a packet a line would be slow. */
function* blocks(lines: readonly string[]): Generator<Buffer> {
  for (let i = 0; i < lines.length; i += 200) yield Buffer.from(lines.slice(i, i + 200).join(''))
}

async function tellerOf({ roots: [root], signer, seed }: FillOptions, startMs: number): Promise<Teller> {
  const [pending] = await root.query<{ n: bigint }[]>('SELECT COUNT(*) AS n FROM ledger_pending')
  if (Number(pending?.n) > 0)
    throw new Error('The ledger has leaves without a place: run the sequencer first.')
  const [next] = await root.query<Record<string, bigint | number>[]>(
    `SELECT (SELECT next FROM counters WHERE name = 'record-number') AS number,
      (SELECT MAX(id) FROM ledger_leaves) AS leafId, (SELECT MAX(id) FROM units) AS unitId`,
  )
  const designs = await root.query<{ id: bigint; key: string }[]>(
    'SELECT id, design_key AS `key` FROM designs',
  )
  return {
    signer,
    random: seededRandom(seed),
    stories: await readStories(root),
    makers: await makersOf(root),
    designIds: new Map(designs.map(({ id, key }) => [key, Number(id)])),
    next: {
      record: 0,
      number: Number(next?.number),
      leafId: Number(next?.leafId) + 1,
      unitId: Number(next?.unitId) + 1,
    },
    startMs,
  }
}

/** The demo's stations by their scripts, and people at no station. */
async function makersOf(root: Connection): Promise<Maker[]> {
  const stations = await root.query<{ id: string; name: string }[]>(
    'SELECT id, name FROM stations ORDER BY name',
  )
  const people = await root.query<{ id: string; name: string; role: string }[]>(
    "SELECT id, name, role FROM people WHERE role IN ('engineer', 'operator') ORDER BY name",
  )
  const scripts = stations.map(({ id, name }) => {
    const by = { id: `demo${name.slice(-1)}000`, kind: 'token', name: `${name} script` }
    return { id: by.id, name: by.name, by: JSON.stringify(by), stationId: id, station: name }
  })
  const persons = people.map(({ id, name, role }) => {
    const by = JSON.stringify({ id, kind: 'person', name, role })
    return { id, name, by, stationId: '', station: '' }
  })
  // Stations record most.
  return [...scripts, ...scripts, ...scripts, ...persons]
}

type Tree = { size: number; peaks: Buffer[] }

async function treeOf(root: Connection): Promise<Tree> {
  const [head] = await root.query<{ size: bigint }[]>('SELECT size FROM ledger_head WHERE id = 1')
  const size = Number(head?.size)
  const peaks: Buffer[] = []
  for (const { level, index } of peakPlaces(size)) {
    const [node] = await root.query<{ hash: Buffer }[]>(
      'SELECT hash FROM ledger_nodes WHERE level = ? AND idx = ?',
      [level, index],
    )
    peaks.push(node!.hash)
  }
  return { size, peaks }
}

async function closeLedger(root: Connection, signer: Signer, { size, peaks }: Tree, at: Date): Promise<void> {
  const hash = Buffer.from(rootOf(sha256, peaks))
  const note = signCheckpoint(sha256, { origin: signer.key.name, size, root: hash }, signer.key, signer.sign)
  const time = at.toISOString().slice(0, 23).replace('T', ' ')
  await root.query(
    'UPDATE ledger_head SET size = ?, root = ?, checkpoint_number = checkpoint_number + 1, checkpoint_size = ?, checkpoint_at = ?',
    [size, hash, size, time],
  )
  await root.query(
    'INSERT INTO ledger_checkpoints (number, size, root, at, note) SELECT checkpoint_number, size, root, ?, ? FROM ledger_head',
    [time, note],
  )
}
