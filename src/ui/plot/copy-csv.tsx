import { Button } from '../button.tsx'
import { copyText } from '../clipboard.ts'
import { csvText } from './copy-plot.ts'
import type { PlotTableData } from './plot-figure.tsx'

/** For a table that is its own picture. */
export function CopyCsv({ csvHead, csvRows }: Pick<PlotTableData, 'csvHead' | 'csvRows'>) {
  return (
    <span className="inline-flex items-center gap-1 whitespace-nowrap print:hidden">
      Copy as
      <Button
        look="quiet"
        className="!min-h-6 min-w-6 justify-center !text-small"
        onClick={() => void copyText(csvText(csvHead, csvRows), 'Copied as CSV.')}
      >
        CSV
      </Button>
    </span>
  )
}
