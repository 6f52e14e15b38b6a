import { createHash, randomUUID } from 'node:crypto'
import express from 'express'
import { createPool } from 'mariadb'

/**
 * The peer of P4: a bare Express route that writes the rows and bytes that a recorded trim writes, in one durable transaction
 * each, by hand-written SQL through the same connector: same lock, same inserts. It checks nothing and solves nothing.
 * `/bare` only inserts the record's rows, without lock, key or unit.
 *
 * The first line of stdin holds the template: the values of one real record.
 */
type Template = {
  databaseUrl: string
  body: string
  record: Record<string, unknown>
  state: string
  scope: string
  answer: string
}

process.stdin.once('data', (chunk: Buffer) => void serve(JSON.parse(chunk.toString()) as Template))

async function serve(template: Template): Promise<void> {
  const { username, password, hostname, port, pathname } = new URL(template.databaseUrl)
  const pool = createPool({
    host: hostname,
    port: Number(port),
    user: username,
    password,
    database: pathname.slice(1),
    connectionLimit: 32,
    initSql: "SET SESSION tx_isolation = 'READ-COMMITTED'",
  })
  const app = express()
  app.use(express.json({ limit: '1mb' }))
  // A generated column takes no value.
  const columns = Object.keys(template.record).filter((name) => name !== 'attempt_band')
  const insertRecord = `INSERT INTO records (${columns.join(', ')}) VALUES (${columns.map(() => '?').join(', ')})`
  let number = 1_000_000_000

  const rowsOf = (unitId: number, unit: string, leafId: number, id: string) =>
    columns.map((name) => {
      if (name === 'id') return id
      if (name === 'number') return ++number
      if (name === 'unit_id') return unitId
      if (name === 'unit') return unit
      if (name === 'leaf_id') return leafId
      return template.record[name]
    })
  const leafOf = (id: string) => {
    const body = template.body.replace(/"id":"[^"]+"/, `"id":"${id}"`)
    return { body, hash: createHash('sha256').update(body).digest() }
  }

  app.post('/trims', async (request, response) => {
    const { unit } = request.body as { unit: string }
    const key = request.get('idempotency-key') ?? ''
    const id = randomUUID()
    const { body, hash } = leafOf(id)
    const connection = await pool.getConnection()
    try {
      await connection.beginTransaction()
      await connection.query(
        'INSERT INTO idempotency_keys (scope, idem_key, body_hash, record_id) VALUES (?, ?, ?, ?)',
        [template.scope, key, hash, id],
      )
      await connection.query('INSERT INTO units (design_id, serial) VALUES (1, ?)', [unit])
      const [row] = await connection.query<{ id: bigint }[]>(
        'SELECT id FROM units WHERE design_id = 1 AND serial = ? FOR UPDATE',
        [unit],
      )
      const unitId = Number(row?.id)
      const leaf = await connection.query<{ insertId: bigint }>(
        "INSERT INTO ledger_leaves (kind, at, hash, body) VALUES ('record', ?, ?, ?)",
        [new Date(), hash, Buffer.from(body)],
      )
      await connection.query('INSERT INTO ledger_pending (leaf_id, hash) VALUES (?, ?)', [
        leaf.insertId,
        hash,
      ])
      await connection.query(insertRecord, rowsOf(unitId, unit, Number(leaf.insertId), id))
      await connection.query(
        'INSERT INTO unit_codes (unit_id, channel, range_id, state) VALUES (?, ?, ?, ?)',
        [unitId, '1', 'u10', template.state],
      )
      await connection.commit()
    } catch (error) {
      await connection.rollback()
      throw error
    } finally {
      await connection.release()
    }
    response.status(201).type('json').send(template.answer)
  })

  app.post('/bare', async (request, response) => {
    const { unit } = request.body as { unit: string }
    const id = randomUUID()
    const { body, hash } = leafOf(id)
    const leaf = await pool.query<{ insertId: bigint }>(
      "INSERT INTO ledger_leaves (kind, at, hash, body) VALUES ('record', ?, ?, ?)",
      [new Date(), hash, Buffer.from(body)],
    )
    await pool.query(insertRecord, rowsOf(1, unit, Number(leaf.insertId), id))
    response.status(201).type('json').send(template.answer)
  })

  const listening = app.listen(0, '127.0.0.1', () => {
    const address = listening.address()
    process.stdout.write(`${typeof address === 'object' && address ? address.port : 0}\n`)
  })
}
