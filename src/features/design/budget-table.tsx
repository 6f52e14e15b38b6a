import type { Design } from '../../../shared/contract/design.ts'
import { exact } from '../../ui/number-format.ts'
import { None, RowHead, Table, Td, Th } from '../../ui/table.tsx'

type Budget = Design['budget']
type Row = {
  path: 'gain' | 'offset'
  name: string
  limit: string
  nominal: string | null
  shape: string
  when: string
  pivot: string | null
}

function rowsOf(budget: NonNullable<Budget>): Row[] {
  const shape = (line: { distribution: string; k?: number | undefined }) =>
    line.k === undefined ? line.distribution : `${line.distribution}, k = ${line.k}`
  return [
    ...budget.gain.map((line) => ({
      path: 'gain' as const,
      name: line.name,
      limit: `${line.limitPpm} ppm`,
      nominal: line.nominalPpm === undefined ? null : `${line.nominalPpm} ppm`,
      shape: shape(line),
      when: line.when,
      pivot: line.pivotV === undefined ? null : exact(line.pivotV, 'V'),
    })),
    ...budget.offset.map((line) => ({
      path: 'offset' as const,
      name: line.name,
      limit: exact(line.limitV, 'V'),
      nominal: line.nominalV === undefined ? null : exact(line.nominalV, 'V'),
      shape: shape(line),
      when: line.when,
      pivot: null,
    })),
  ]
}

export function BudgetTable({ budget }: { budget: Budget }) {
  const rows = budget ? rowsOf(budget) : []
  if (rows.length === 0) return <p className="text-ink-2">No line is stated.</p>
  return (
    <Table caption="Error budget">
      <thead>
        <tr>
          <Th>line</Th>
          <Th>path</Th>
          <Th align="right">limit</Th>
          <Th align="right">nominal</Th>
          <Th>shape</Th>
          <Th>when</Th>
          <Th>pivot</Th>
        </tr>
      </thead>
      <tbody>
        {rows.map((row, i) => (
          // biome-ignore lint/suspicious/noArrayIndexKey: stored lines; two may be the same
          <tr key={i}>
            <RowHead className="font-normal">{row.name}</RowHead>
            <Td className={row.path === 'gain' ? 'text-copper' : 'text-tide'}>{row.path}</Td>
            <Td align="right">{row.limit}</Td>
            <Td align="right">{row.nominal ?? <None />}</Td>
            <Td>{row.shape}</Td>
            <Td>{row.when}</Td>
            <Td>{row.pivot ?? <None />}</Td>
          </tr>
        ))}
      </tbody>
    </Table>
  )
}
