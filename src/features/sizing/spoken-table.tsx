import type { PlotTableData } from '../../ui/plot/plot-figure.tsx'

/** The picture for a screen reader: never seen, never a tab stop. */
export function SpokenTable({ table }: { table: PlotTableData }) {
  return (
    <table>
      <caption>Trim ladder, rung by rung</caption>
      <thead>
        <tr>
          {table.head.map((name) => (
            <th key={name} scope="col">
              {name}
            </th>
          ))}
        </tr>
      </thead>
      <tbody>
        {table.rows.map((row) => (
          <tr key={`${row[0]} ${row[1]}`}>
            {row.map((cell, column) => (
              <td key={table.head[column]}>{cell}</td>
            ))}
          </tr>
        ))}
      </tbody>
    </table>
  )
}
