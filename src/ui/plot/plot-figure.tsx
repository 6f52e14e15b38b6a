import { type ReactNode, useId, useState } from 'react'
import { Button } from '../button.tsx'
import { copyText } from '../clipboard.ts'
import { Segmented } from '../segmented.tsx'
import { announce } from '../status.tsx'
import { Table } from '../table.tsx'
import { useWidth } from './use-width.ts'

export type PlotTableData = {
  head: readonly string[]
  /** As shown, right aligned. */
  rows: readonly (readonly string[])[]
  /** As copied: full doubles, ASCII names. */
  csvHead: readonly string[]
  csvRows: readonly (readonly (number | string | null)[])[]
}

type PlotFigureProps = {
  title: string
  /** Said after the title, in ink-3. */
  note?: string | undefined
  /** Unit choices, value and label; none when the plot has one unit only. */
  units: readonly (readonly [string, string])[]
  unit: string
  onUnit: (unit: string) => void
  table: PlotTableData
  caption: ReactNode
  /** Given when a page key shows all its plots as tables. */
  asTable?: boolean | undefined
  onTable?: ((asTable: boolean) => void) | undefined
  /** Other controls, left of the switch. */
  side?: ReactNode
  children: (width: number) => ReactNode
}

const atDesk = 586

/** The frame of every plot: title, unit switch, table, caption, copy. Prints without its controls. */
export function PlotFigure(props: PlotFigureProps) {
  const { ref, width } = useWidth(atDesk)
  const [ownTable, setOwnTable] = useState(false)
  const asTable = props.asTable ?? ownTable
  const setTable = props.onTable ?? setOwnTable
  const titleId = useId()
  const choose = (value: string) => {
    setTable(value === 'table')
    if (value !== 'table') props.onUnit(value)
  }
  return (
    <figure
      aria-labelledby={titleId}
      className="plot-figure min-w-0 break-inside-avoid border-t border-rule pt-1"
    >
      <div className="flex min-h-[30px] flex-wrap items-center gap-x-3 gap-y-1">
        <div className="flex grow flex-wrap items-baseline gap-x-3">
          <h2 id={titleId} className="text-body font-semibold">
            {props.title}
          </h2>
          {props.note ? <span className="text-small text-ink-3">{props.note}</span> : null}
        </div>
        {props.side}
        <Segmented
          label={`${props.title}, shown in`}
          segments={[...props.units, ['table', 'table'] as const].map(([value, label]) => ({ value, label }))}
          value={asTable ? 'table' : props.unit}
          onChange={choose}
        />
      </div>
      <div ref={ref} className="min-w-0">
        {asTable ? <PlotTable title={props.title} table={props.table} /> : props.children(width)}
      </div>
      <figcaption className="mt-2 text-small text-ink-3">
        {props.caption} <CopyPlot figure={ref} table={props.table} hasDrawing={!asTable} />
      </figcaption>
    </figure>
  )
}

export function PlotTable({ title, table }: { title: string; table: PlotTableData }) {
  return (
    <div className="mt-2">
      <Table caption={`${title}, as a table`}>
        <thead>
          <tr className="border-b border-rule text-small">
            {table.head.map((name) => (
              <th key={name} scope="col" className="px-2 py-1 text-right font-medium whitespace-pre-line">
                {name}
              </th>
            ))}
          </tr>
        </thead>
        <tbody>
          {table.rows.map((row, index) => (
            // biome-ignore lint/suspicious/noArrayIndexKey: rows have no identity beyond their place
            <tr key={index} className="border-b border-hair">
              {row.map((cell, column) => (
                // biome-ignore lint/suspicious/noArrayIndexKey: nor do cells
                <td key={column} className="h-6 px-2 text-right">
                  {cell}
                </td>
              ))}
            </tr>
          ))}
        </tbody>
      </Table>
    </div>
  )
}

/** Wanted by a press only. */
const load = () => import('./copy-plot.ts')

type CopyPlotProps = {
  figure: { current: HTMLDivElement | null }
  table: PlotTableData
  hasDrawing: boolean
}

function CopyPlot({ figure, table, hasDrawing }: CopyPlotProps) {
  const copyDrawing = async () => {
    const svg = figure.current?.querySelector('svg')
    if (!svg) return
    const { svgText } = await load()
    await navigator.clipboard.writeText(svgText(svg)).then(
      () => announce('Copied as SVG.'),
      () => announce('The browser did not allow copying.'),
    )
  }
  const copyTable = async () => {
    const { csvText } = await load()
    await copyText(csvText(table.csvHead, table.csvRows), 'Copied as CSV.')
  }
  return (
    <span className="inline-flex items-center gap-1 whitespace-nowrap print:hidden">
      Copy as
      {hasDrawing && (
        <Button look="quiet" className={small} onClick={() => void copyDrawing()}>
          SVG
        </Button>
      )}
      <Button look="quiet" className={small} onClick={() => void copyTable()}>
        CSV
      </Button>
    </span>
  )
}

const small = '!min-h-6 min-w-6 justify-center !text-small'
