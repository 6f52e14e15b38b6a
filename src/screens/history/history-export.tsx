import { lazy, Suspense } from 'react'
import type { Counted } from '../../features/record/count-words.ts'
import type { Filters } from '../../features/record/filters.ts'
import { Loading } from '../../ui/loading.tsx'

const ExportDialog = lazy(() =>
  import('../../features/record/export-dialog.tsx').then(({ ExportDialog }) => ({ default: ExportDialog })),
)

/** Loaded when it is asked for: most visits export nothing. */
export function HistoryExport(props: {
  filters: Filters
  counted: Counted | undefined
  onClose: () => void
}) {
  return (
    <Suspense fallback={<Loading>Opening the export.</Loading>}>
      <ExportDialog {...props} />
    </Suspense>
  )
}
