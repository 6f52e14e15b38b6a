import { Button } from '../../ui/button.tsx'
import { Caution } from '../../ui/caution.tsx'
import type { PasteReport as Report } from './grid-state.ts'

type PasteReportProps = { report: Report; onDecimalCommas: () => void; onDismiss: () => void }

/** What a paste took and what it refused, cell by cell; nothing is changed without being asked. */
export function PasteReport({ report, onDecimalCommas, onDismiss }: PasteReportProps) {
  const { taken, total, refused, lost } = report
  const commas = refused.filter((cell) => cell.isDecimalComma)
  const others = refused.filter((cell) => !cell.isDecimalComma)
  const first = commas[0]
  return (
    <div role="status" className="mt-2">
      <Caution>
        <p>
          {taken} of {total} cells taken.{' '}
          {first ? `Cell ${first.row + 1}, ${first.text}: a comma. Is it a decimal comma?` : null}
          {lost}
        </p>
        {others.slice(0, 5).map((cell) => (
          <p key={`${cell.row} ${cell.column}`}>
            Cell {cell.row + 1}, {cell.text}: {cell.why}
          </p>
        ))}
        {others.length > 5 ? <p>{others.length - 5} more were refused.</p> : null}
        <p className="mt-1 flex gap-2">
          {first ? (
            <>
              <Button onClick={onDecimalCommas}>{commas.length > 1 ? 'Yes, all' : 'Yes'}</Button>
              <Button onClick={onDismiss}>No</Button>
            </>
          ) : (
            <Button onClick={onDismiss}>Understood</Button>
          )}
        </p>
      </Caution>
    </div>
  )
}
