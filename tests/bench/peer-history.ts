import express from 'express'
import { createPool } from 'mariadb'

/**
 * The peer of P5: a bare Express route that reads the same rows by SQL written by hand for the one filter, through the same
 * connector. It checks no caller and no query, and knows which index there is.
 *
 * The first line of stdin holds the database's URL and the statements by name; a statement's values come in the address.
 */
process.stdin.once('data', (chunk: Buffer) => serve(JSON.parse(chunk.toString()) as Given))

type Given = { databaseUrl: string; statements: Record<string, string> }

function serve({ databaseUrl, statements }: Given): void {
  const { username, password, hostname, port, pathname } = new URL(databaseUrl)
  const pool = createPool({
    host: hostname,
    port: Number(port),
    user: username,
    password,
    database: pathname.slice(1),
    connectionLimit: 4,
    timezone: 'Z',
    bigIntAsNumber: true,
  })
  const app = express()
  app.get('/:name', async (request, response) => {
    const values = JSON.parse(String(request.query.values)) as string[]
    const rows = await pool.query<Record<string, unknown>[]>(statements[request.params.name]!, values)
    response.json({ items: rows.slice(0, 50), next: rows.length > 50 ? rows[49]!.id : null })
  })
  const listening = app.listen(0, '127.0.0.1', () => {
    const address = listening.address()
    process.stdout.write(`${typeof address === 'object' && address ? address.port : 0}\n`)
  })
}
