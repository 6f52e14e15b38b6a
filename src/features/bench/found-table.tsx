import type { FitResult } from '../../../shared/solver/types.ts'
import { fixed } from '../../ui/number-format.ts'
import { NumberText, Whole } from '../../ui/number-text.tsx'
import { Table, Td, Th } from '../../ui/table.tsx'

/** The points of a pass that is recorded: as measured then, to read and not to change. */
export function FoundTable({ fit, decimals, label }: { fit: FitResult; decimals: number; label: string }) {
  return (
    <Table caption={label}>
      <thead>
        <tr>
          <Th align="right">code</Th>
          <Th align="right" unit="V" className="hidden narrow:table-cell">
            ideal
          </Th>
          <Th align="right" unit="V">
            measured
          </Th>
          <Th align="right" unit="µV">
            error
          </Th>
          <Th align="right" unit="LSB">
            residual
          </Th>
        </tr>
      </thead>
      <tbody>
        {fit.residuals.map((point, index) => (
          // biome-ignore lint/suspicious/noArrayIndexKey: replicates share their code
          <tr key={index}>
            <Td align="right">
              <Whole value={point.code} />
            </Td>
            <Td align="right" className="hidden text-ink-2 narrow:table-cell">
              <NumberText>{fixed(point.idealV, decimals)}</NumberText>
            </Td>
            <Td align="right">
              <NumberText>{fixed(point.measuredV, decimals + 1)}</NumberText>
            </Td>
            <Td align="right">
              <NumberText>{fixed(point.errorV * 1e6, 1, 'always')}</NumberText>
            </Td>
            <Td align="right">
              <NumberText>{fixed(point.residualLsb, 2, 'always')}</NumberText>
            </Td>
          </tr>
        ))}
      </tbody>
    </Table>
  )
}
