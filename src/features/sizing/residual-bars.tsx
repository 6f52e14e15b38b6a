import type { SizeResult, SizingDesign } from '../../../shared/solver/sizing/types.ts'
import { CopyCsv } from '../../ui/plot/copy-csv.tsx'
import { Quantity } from '../../ui/quantity.tsx'
import { Section } from '../../ui/section.tsx'
import { Segmented } from '../../ui/segmented.tsx'
import { Table, Th } from '../../ui/table.tsx'
import { ResidualRow } from './residual-row.tsx'
import { ResidualTotals } from './residual-totals.tsx'
import {
  columnLook,
  type ResidualUnit,
  residualCsv,
  residualUnits,
  shareText,
  voltColumn,
} from './residual-units.ts'

export type ResidualBarsProps = {
  design: SizingDesign
  result: SizeResult
  /** The one column of numbers that a narrow page has room for; a wide one shows all three. */
  unit: ResidualUnit
  onUnit: (unit: ResidualUnit) => void
  onField?: ((path: string) => void) | undefined
}

/** What no trim removes and what trimming leaves, largest first; a bar's colour is the way by which it comes. */
export function ResidualBars({ design, result, unit, onUnit, onField }: ResidualBarsProps) {
  const { residual } = result
  const volt = voltColumn(residual)
  const heads = { V: volt.name, LSB: 'LSB', ppm: 'ppm' }
  return (
    <Section
      title="Residual after trim"
      note="what no trim removes, and what trimming leaves"
      side={
        <Segmented
          label="Residual after trim, shown in"
          segments={residualUnits.map((value) => ({ value, label: heads[value] }))}
          value={unit}
          onChange={onUnit}
        />
      }
    >
      <Table caption="Residual after trim, largest first">
        <thead>
          <tr>
            <Th>Line</Th>
            <Th className="hidden medium:table-cell print:table-cell">from</Th>
            {residualUnits.map((one) => (
              <Th key={one} align="right" className={columnLook(one, unit)}>
                {heads[one]}
              </Th>
            ))}
            <Th className="w-[34%]">share of the worst case</Th>
          </tr>
        </thead>
        <tbody>
          {residual.lines.map((line, index) => (
            <ResidualRow
              key={`${line.path} ${line.kind} ${line.name}`}
              line={line}
              index={index}
              explained={{ design, result }}
              perVolt={volt.perVolt}
              unit={unit}
              onField={onField}
            />
          ))}
        </tbody>
        <ResidualTotals explained={{ design, result }} perVolt={volt.perVolt} unit={unit} onField={onField} />
      </Table>
      <p className="mt-1 text-small text-ink-3">
        <Largest result={result} />
        Copper: by way of gain. Tide: by way of offset. Ink: neither. <CopyCsv {...residualCsv(residual)} />
      </p>
    </Section>
  )
}

/** The end of the range to the last microvolt: it is a code's place and no estimate. */
function Largest({ result: { residual } }: { result: SizeResult }) {
  const [first] = residual.lines
  const remains = first?.kind === 'budget' ? ', and no trim removes it' : ''
  return (
    <>
      At <Quantity value={residual.atV} unit="V" digits={7} />, where it is largest.{' '}
      {first ? `${first.name} makes ${shareText(first.share)} of it${remains}. ` : null}
    </>
  )
}
