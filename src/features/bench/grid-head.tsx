import type { Column } from './grid-state.ts'

export const columnNames: Record<Column, { name: string; unit: string; spoken: string }> = {
  code: { name: 'code', unit: '', spoken: 'code' },
  ideal: { name: 'ideal', unit: 'V', spoken: 'ideal, volts' },
  measured: { name: 'measured', unit: 'V', spoken: 'measured, volts' },
  u: { name: 'u, k = 1', unit: 'V', spoken: 'standard uncertainty, volts' },
  error: { name: 'error', unit: 'µV', spoken: 'error, microvolts' },
  residual: { name: 'residual', unit: 'LSB', spoken: 'residual, LSB' },
  errorLsb: { name: 'error', unit: 'LSB', spoken: 'error, LSB' },
  expanded: { name: 'U', unit: 'LSB', spoken: 'expanded uncertainty, LSB' },
  decision: { name: '', unit: 'decision', spoken: 'decision' },
}

/** The ideal column drops where there is no room; a tap on a code shows it under the grid. */
export const narrowHidden = (column: Column): string => (column === 'ideal' ? 'hidden narrow:table-cell' : '')

export function GridHead({ columns }: { columns: readonly Column[] }) {
  const row = { role: 'row', 'aria-rowindex': 1 }
  return (
    <thead>
      <tr {...row}>
        {columns.map((column) => {
          const { name, unit, spoken } = columnNames[column]
          const head = { role: 'columnheader', 'aria-label': spoken }
          const isSingle = unit === ''
          return (
            <th
              key={column}
              scope="col"
              {...head}
              className={`border-b border-rule px-1 pb-1 align-bottom text-small font-medium last:pr-0 ${column === 'decision' ? 'pl-3 text-left' : 'text-right'} ${narrowHidden(column)}`}
            >
              {isSingle ? null : <span className="block min-h-4">{name}</span>}
              <span className="block">{isSingle ? name : unit}</span>
            </th>
          )
        })}
      </tr>
    </thead>
  )
}
