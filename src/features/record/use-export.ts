import { useEffect, useRef, useState } from 'react'
import { pathOf } from '../../../shared/call.ts'
import { exportRecords, exportRecordsCsv } from '../../../shared/contract/history.ts'
import { OgeeError } from '../../../shared/errors.ts'
import { apiStream } from '../../lib/api.ts'
import { downloadBlob } from '../../ui/download.ts'
import type { Filters } from './filters.ts'

export type ExportFormat = 'csv' | 'ndjson'
export type ExportState =
  | { is: 'idle' }
  | { is: 'running' | 'done' | 'stopped'; lines: number; bytes: number }
  | { is: 'failed'; error: unknown }

const newline = 10
/** The state is told at most so often. Milliseconds. */
const tellEveryMs = 100

/** Reads an export as it comes, so that its size is seen growing and it can be stopped; a cut one makes no file. */
export function useExport(filters: Filters) {
  const [state, setState] = useState<ExportState>({ is: 'idle' })
  const running = useRef<AbortController | null>(null)
  useEffect(() => () => running.current?.abort(), [])

  const start = async (format: ExportFormat) => {
    const controller = new AbortController()
    running.current = controller
    const endpoint = format === 'csv' ? exportRecordsCsv : exportRecords
    const parts: BlobPart[] = []
    // The first line of CSV is its head.
    const progress = { lines: format === 'csv' ? -1 : 0, bytes: 0 }
    const tell = (is: 'running' | 'done' | 'stopped') =>
      setState({ is, lines: Math.max(0, progress.lines), bytes: progress.bytes })
    tell('running')
    try {
      const response = await apiStream(pathOf(endpoint, { query: filters }), controller.signal)
      let told = 0
      for await (const chunk of chunksOf(response)) {
        parts.push(chunk)
        progress.bytes += chunk.length
        for (const byte of chunk) if (byte === newline) progress.lines++
        if (performance.now() - told > tellEveryMs) {
          told = performance.now()
          tell('running')
        }
      }
      const day = new Date().toISOString().slice(0, 10)
      downloadBlob(`ogee records ${day}.${format}`, new Blob(parts))
      tell('done')
    } catch (error) {
      if (controller.signal.aborted) tell('stopped')
      else if (error instanceof OgeeError) setState({ is: 'failed', error })
      else setState({ is: 'failed', error: cut(error) })
    }
  }
  return { state, start, stop: () => running.current?.abort() }
}

async function* chunksOf(response: Response): AsyncGenerator<Uint8Array<ArrayBuffer>> {
  const reader = response.body?.getReader()
  if (!reader) return
  for (;;) {
    const { done, value } = await reader.read()
    if (done) return
    yield value
  }
}

const cut = (cause: unknown) =>
  new OgeeError('answer-cut', 'The export was cut on its way; no file was made. Start it again.', { cause })
