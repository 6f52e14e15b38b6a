import { Caution } from '../../ui/caution.tsx'
import { fixed, minus } from '../../ui/number-format.ts'
import { NumberText } from '../../ui/number-text.tsx'
import { None, RowHead, Table, Td, Th } from '../../ui/table.tsx'
import { Verdict } from '../../ui/verdict.tsx'
import type { Recomputed, Row } from './recompute.ts'

type Done = Extract<Recomputed, { is: 'done' }>

/** Stored and computed now, compared bit for bit and not as shown. */
export function RecomputedTable({ again }: { again: Done }) {
  const differing = again.rows.find((row) => row.stored !== row.now)
  const same = differing === undefined && again.storedVerdict === again.verdict
  return (
    <>
      <Table caption="Recomputed from the stored points">
        <thead>
          <tr>
            <Th>quantity</Th>
            <Th align="right">stored</Th>
            <Th align="right">recomputed now</Th>
            <Th>difference</Th>
          </tr>
        </thead>
        <tbody>
          {again.rows.map((row) => (
            <tr key={row.name}>
              <RowHead className={tone(row.name)}>{row.unit ? `${row.name}, ${row.unit}` : row.name}</RowHead>
              <Td align="right">{shown(row, row.stored)}</Td>
              <Td align="right">{shown(row, row.now)}</Td>
              <Td>{difference(row)}</Td>
            </tr>
          ))}
          <tr className="font-medium">
            <RowHead>Solver</RowHead>
            <Td align="right">{again.storedSolver}</Td>
            <Td align="right">{again.solver}</Td>
            <Td>{same ? <Verdict verdict="pass" word="same result" /> : null}</Td>
          </tr>
        </tbody>
      </Table>
      {same ? null : (
        <div className="mt-2" role="alert">
          <Caution tone="bad">
            <Verdict verdict="fail" word="differs" /> {sentence(again, differing)}
          </Caution>
        </div>
      )}
    </>
  )
}

function tone(name: string): string {
  if (name.startsWith('Offset')) return 'text-tide'
  return name.startsWith('Gain') ? 'text-copper' : ''
}

function shown(row: Row, value: number | null) {
  if (value === null) return <None />
  return (
    <NumberText>
      {fixed(value, row.decimals, row.unit === 'µV' || row.unit === 'ppm' ? 'always' : 'auto')}
    </NumberText>
  )
}

function difference(row: Row): string {
  if (row.stored === row.now) return row.unit === '' ? 'none' : 'none, bit for bit'
  if (row.stored === null || row.now === null) return 'one does not exist'
  return (row.now - row.stored).toExponential(1).replaceAll('-', minus)
}

function sentence(again: Done, row: Row | undefined): string {
  if (!row)
    return `Solver ${again.solver} gives ${again.verdict}, stored is ${again.storedVerdict}. See the changelog.`
  const text = (value: number | null) => (value === null ? 'none' : String(value).replace('-', minus))
  return `Solver ${again.solver} gives ${row.name.toLowerCase()} ${text(row.now)}, stored is ${text(row.stored)}. See the changelog.`
}
