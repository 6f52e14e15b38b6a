import { Button } from '../../ui/button.tsx'
import { Dialog } from '../../ui/dialog.tsx'
import { Problem } from '../../ui/problem.tsx'
import { type Counted, spaced } from './count-words.ts'
import type { Filters } from './filters.ts'
import { type ExportFormat, useExport } from './use-export.ts'

/** Bytes of a line, roughly, to say beforehand what will come. */
const lineBytes: Record<ExportFormat, number> = { csv: 190, ndjson: 480 }
const names: Record<ExportFormat, string> = { csv: 'CSV', ndjson: 'JSON lines' }

/** Exactly what is filtered, to a file, with what is already there and a way to stop. */
export function ExportDialog({
  filters,
  counted,
  onClose,
}: {
  filters: Filters
  counted: Counted | undefined
  onClose: () => void
}) {
  const { state, start, stop } = useExport(filters)
  return (
    <Dialog
      title="Export"
      onClose={() => {
        stop()
        onClose()
      }}
    >
      <p>{sentence(counted)} What is recorded from now on is not part of it.</p>
      <div role="status" className="mt-3 min-h-6">
        {state.is === 'running' ? `${spaced(state.lines)} records, ${size(state.bytes)} so far.` : null}
        {state.is === 'done'
          ? `${spaced(state.lines)} records, ${size(state.bytes)}, handed to the browser.`
          : null}
        {state.is === 'stopped' ? `Stopped at ${spaced(state.lines)}. No file was made.` : null}
      </div>
      {state.is === 'failed' ? <Problem error={state.error} /> : null}
      <div className="mt-3 flex flex-wrap gap-3">
        {state.is === 'running' ? (
          <Button onClick={stop}>Stop</Button>
        ) : (
          (['csv', 'ndjson'] as const).map((format, i) => (
            <Button
              key={format}
              look={i === 0 ? 'primary' : 'plain'}
              {...(i === 0 ? { 'data-first': true } : {})}
              onClick={() => void start(format)}
            >
              {names[format]}
              {counted?.count && !counted.more ? `, about ${size(counted.count * lineBytes[format])}` : ''}
            </Button>
          ))
        )}
        <Button
          look="quiet"
          onClick={() => {
            stop()
            onClose()
          }}
        >
          Close
        </Button>
      </div>
    </Dialog>
  )
}

function sentence(counted: Counted | undefined): string {
  const all = 'All records that match, newest first.'
  if (!counted || counted.count === null) return all
  if (counted.more) return `Over ${spaced(counted.count)} records, newest first.`
  return counted.count === 1 ? 'One record.' : `${spaced(counted.count)} records, newest first.`
}

function size(bytes: number): string {
  if (bytes < 1e3) return `${bytes} B`
  return bytes < 1e6 ? `${(bytes / 1e3).toFixed(0)} kB` : `${(bytes / 1e6).toFixed(1)} MB`
}
