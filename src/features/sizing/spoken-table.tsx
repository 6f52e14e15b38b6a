import { memo } from 'react'
import type { Ladder } from '../../../shared/solver/sizing/ladder.ts'
import { ladderTable } from './ladder-words.ts'

/** The picture for a screen reader: never seen, never a tab stop. */
export const SpokenTable = memo(function SpokenTable({ ladders }: { ladders: readonly Ladder[] }) {
  const table = ladderTable(ladders)
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
})
