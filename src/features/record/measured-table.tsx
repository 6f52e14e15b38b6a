import type { CodesDocument } from '../../../shared/contract/codes.ts'
import type { VerifyDocument } from '../../../shared/contract/verify.ts'
import { fixed } from '../../ui/number-format.ts'
import { NumberText, Whole } from '../../ui/number-text.tsx'
import { None, Table, Td, Th } from '../../ui/table.tsx'
import { Verdict, VerdictMark } from '../../ui/verdict.tsx'
import { voltDecimals } from './volt-decimals.ts'

/** The points of a trim: ideal, measured, error and what the line leaves. Flagged points carry the diamond. */
export function FoundTable({ fit, lsbV }: { fit: CodesDocument['fit']; lsbV: number }) {
  const flagged = new Set(fit.flags.flatMap((flag) => (flag.code === null ? [] : [flag.code])))
  const decimals = voltDecimals(lsbV)
  return (
    <Table caption="Points as measured">
      <thead>
        <tr>
          <Th align="right">code</Th>
          <Th align="right" unit="V">
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
        {fit.residuals.map((point, i) => (
          // biome-ignore lint/suspicious/noArrayIndexKey: stored points; a code may stand twice
          <tr key={i}>
            <Td align="right">
              <Whole value={point.code} />
            </Td>
            <Td align="right" className="text-ink-2">
              <NumberText>{fixed(point.idealV, decimals)}</NumberText>
            </Td>
            <Td align="right">
              <NumberText>{fixed(point.measuredV, decimals + 1)}</NumberText>
            </Td>
            <Td align="right">
              <NumberText>{fixed(point.errorV * 1e6, 1, 'always')}</NumberText>
            </Td>
            <Td align="right">
              {flagged.has(point.code) ? <VerdictMark verdict="suspect" label="flagged" /> : null}{' '}
              <NumberText>{fixed(point.residualLsb, 2, 'always')}</NumberText>
            </Td>
          </tr>
        ))}
      </tbody>
    </Table>
  )
}

/** The points of a verification against the tolerance. */
export function LeftTable({ verify, lsbV }: { verify: VerifyDocument; lsbV: number }) {
  const decimals = voltDecimals(lsbV)
  return (
    <Table caption="Points as left">
      <thead>
        <tr>
          <Th align="right">code</Th>
          <Th align="right" unit="V">
            ideal
          </Th>
          <Th align="right" unit="V">
            measured
          </Th>
          <Th align="right" unit="µV">
            error
          </Th>
          <Th align="right" unit="LSB">
            error
          </Th>
          <Th align="right" unit="LSB">
            U
          </Th>
          <Th align="right" unit="%">
            P(in)
          </Th>
          <Th>decision</Th>
        </tr>
      </thead>
      <tbody>
        {verify.points.map((point, i) => (
          // biome-ignore lint/suspicious/noArrayIndexKey: stored points; a code may stand twice
          <tr key={i}>
            <Td align="right">
              <Whole value={point.code} />
            </Td>
            <Td align="right" className="text-ink-2">
              <NumberText>{fixed(point.idealV, decimals)}</NumberText>
            </Td>
            <Td align="right">
              <NumberText>{fixed(point.measuredV, decimals + 1)}</NumberText>
            </Td>
            <Td align="right">
              <NumberText>{fixed(point.errorV * 1e6, 1, 'always')}</NumberText>
            </Td>
            <Td align="right">
              <NumberText>{fixed(point.errorLsb, 2, 'always')}</NumberText>
            </Td>
            <Td align="right" className="text-ink-2">
              {point.expandedUncertaintyV === null ? <None /> : fixed(point.expandedUncertaintyV / lsbV, 2)}
            </Td>
            <Td align="right">
              {point.conformanceProbability === null ? (
                <None />
              ) : (
                fixed(point.conformanceProbability * 100, 1)
              )}
            </Td>
            <Td>
              <Verdict verdict={point.outcome} />
            </Td>
          </tr>
        ))}
      </tbody>
    </Table>
  )
}
