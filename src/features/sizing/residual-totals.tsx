import { fixed } from '../../ui/number-format.ts'
import { RowHead, Td } from '../../ui/table.tsx'
import { Explain } from './explain.tsx'
import type { Explained } from './explained.ts'
import { columnLook, type ResidualUnit } from './residual-units.ts'

type ResidualTotalsProps = {
  explained: Explained
  perVolt: number
  unit: ResidualUnit
  onField?: ((path: string) => void) | undefined
}

/** Worst-case sum and root sum square. */
export function ResidualTotals({ explained, perVolt, unit, onField }: ResidualTotalsProps) {
  const { residual } = explained.result
  const rows = [
    {
      name: 'Worst case, sum',
      path: '/residual/worstCaseV',
      values: [residual.worstCaseV * perVolt, residual.worstCaseLsb, residual.worstCasePpm],
    },
    {
      name: 'Root sum square, 95 %',
      path: '/residual/rssV',
      values: [residual.rssV * perVolt, residual.rssLsb, residual.rssPpm],
    },
  ]
  const units = ['V', 'LSB', 'ppm'] as const
  return (
    <tfoot className="font-medium">
      {rows.map(({ name, path, values }) => (
        <tr key={path} className="border-t border-rule">
          <RowHead>
            <Explain
              {...explained}
              name={name}
              of={[{ label: name, path }]}
              onField={onField}
              className="text-left"
            >
              {name}
            </Explain>
          </RowHead>
          <Td className="hidden medium:table-cell print:table-cell" />
          {units.map((one, i) => (
            <Td key={one} align="right" className={columnLook(one, unit)}>
              {fixed(values[i] ?? 0, 2)}
            </Td>
          ))}
          <Td />
        </tr>
      ))}
    </tfoot>
  )
}
