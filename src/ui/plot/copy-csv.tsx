import { Button } from '../button.tsx'
import { copyText } from '../clipboard.ts'
import type { PlotTableData } from './plot-figure.tsx'

/** For a table that is its own picture. */
export function CopyCsv({ csvHead, csvRows }: Pick<PlotTableData, 'csvHead' | 'csvRows'>) {
  const copy = async () => {
    // Wanted by a press only.
    const { csvText } = await import('./copy-plot.ts')
    await copyText(csvText(csvHead, csvRows), 'Copied as CSV.')
  }
  return (
    <span className="inline-flex items-center gap-1 whitespace-nowrap print:hidden">
      Copy as
      <Button
        look="quiet"
        className="!min-h-6 min-w-6 justify-center !text-small"
        onClick={() => void copy()}
      >
        CSV
      </Button>
    </span>
  )
}
