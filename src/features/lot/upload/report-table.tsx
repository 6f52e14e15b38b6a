import { Button } from '../../../ui/button.tsx'
import { download } from '../../../ui/download.ts'
import { Table, Td, Th } from '../../../ui/table.tsx'
import { Verdict } from '../../../ui/verdict.tsx'
import { repairCsv, reportCsv } from './report.ts'
import type { Upload } from './use-upload.ts'

const shownMost = 50

/** Each measurement that was left out or is not good, by its lines; as a file, and as rows to repair. */
export function ReportTable({ upload: { plan, reports } }: { upload: Upload }) {
  if (!plan || reports.length === 0) return null
  const stem = plan.name.replace(/\.[^.]*$/, '')
  const left = reports.filter(({ verdict }) => verdict === null).length
  return (
    <>
      <Table caption="Measurements of the file that need a look">
        <thead>
          <tr>
            <Th align="right">line</Th>
            <Th>unit</Th>
            <Th>ch.</Th>
            <Th>verdict</Th>
            <Th>what</Th>
          </tr>
        </thead>
        <tbody>
          {reports.slice(0, shownMost).map((report) => (
            <tr key={`${report.firstLine} ${report.message}`}>
              <Td align="right">{report.firstLine}</Td>
              <Td className="[overflow-wrap:anywhere]">{report.unit}</Td>
              <Td>{report.channel}</Td>
              <Td>
                {report.verdict === null ? (
                  <strong className="font-semibold">left out</strong>
                ) : (
                  <Verdict verdict={report.verdict} />
                )}
              </Td>
              <Td>{report.message}</Td>
            </tr>
          ))}
        </tbody>
      </Table>
      <p className="flex flex-wrap items-center gap-x-3 text-small text-ink-2">
        {reports.length > shownMost ? `${reports.length - shownMost} more in the file.` : null}
        <Button look="quiet" onClick={() => download(`${stem}-report.csv`, reportCsv(reports), csvType)}>
          Report, CSV
        </Button>
        {left > 0 ? (
          <Button
            look="quiet"
            onClick={() => download(`${stem}-repair.csv`, repairCsv(plan.text, reports), csvType)}
          >
            Rows to repair, CSV
          </Button>
        ) : null}
      </p>
    </>
  )
}

const csvType = 'text/csv;charset=utf-8'
