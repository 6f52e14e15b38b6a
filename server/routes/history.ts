import type { Response } from 'express'
import {
  countRecords,
  exportRecords,
  exportRecordsCsv,
  listRecorders,
} from '../../shared/contract/history.ts'
import type { RecordLine } from '../../shared/contract/record.ts'
import { recordCells, recordHeads } from '../../shared/history/record-cells.ts'
import { csvLine } from '../../shared/points/csv-line.ts'
import { countRecords as count } from '../commands/history/count-records.ts'
import { exportRecords as allOf } from '../commands/history/export-records.ts'
import { listRecorders as recorders } from '../commands/history/list-recorders.ts'
import { bounded } from '../db/sql.ts'
import { fileName } from '../http/file-name.ts'
import { ReadyLines, type Serve } from '../http/serve.ts'
import type { RouteDeps } from './route-deps.ts'

export function historyRoutes(serve: Serve, { database, now }: RouteDeps): void {
  serve(countRecords, async ({ query, principal }) => count(database.sql, query, principal))

  serve(listRecorders, async ({ principal }) => ({
    items: await recorders(bounded(database.sql), principal),
    next: null,
  }))

  serve(exportRecords, async ({ query, principal, response }) => {
    asFile(response, `ogee records ${dayOf(now())}.ndjson`)
    return new ReadyLines(linesOf(allOf(database, query, principal)))
  })

  serve(exportRecordsCsv, async ({ query, principal, response }) => {
    asFile(response, `ogee records ${dayOf(now())}.csv`)
    return new ReadyLines(rowsOf(allOf(database, query, principal)))
  })
}

async function* linesOf(pages: AsyncIterable<RecordLine[]>) {
  for await (const page of pages) yield page.map((line) => JSON.stringify(line))
}

async function* rowsOf(pages: AsyncIterable<RecordLine[]>) {
  yield [csvLine(recordHeads)]
  for await (const page of pages) yield page.map((line) => csvLine(recordCells(line)))
}

function asFile(response: Response, name: string): void {
  response.setHeader('Content-Disposition', fileName(name))
}

const dayOf = (at: Date) => at.toISOString().slice(0, 10)
