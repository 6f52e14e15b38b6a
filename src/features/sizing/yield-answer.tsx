import type { YieldResult } from '../../../shared/solver/yield/types.ts'
import { fixed } from '../../ui/number-format.ts'
import { Table, Td, Th } from '../../ui/table.tsx'
import { YieldPlot } from './yield-plot.tsx'

const percent = (share: number, decimals = 2): string => `${fixed(share * 100, decimals)} %`

/** Histogram of what remains, beside the yield of each pass. */
export function YieldAnswer({ result }: { result: YieldResult }) {
  const lastPass = result.passes.length
  return (
    <div className="grid gap-x-7 gap-y-3 wide:grid-cols-[minmax(0,1.15fr)_minmax(0,1fr)]">
      <YieldPlot result={result} />
      <div>
        <Table caption="Yield by pass" className="whitespace-nowrap">
          <thead>
            <tr>
              <Th>passes</Th>
              <Th align="right">yield</Th>
              <Th align="right">95 % interval</Th>
              <Th align="right">out of reach</Th>
              <Th align="right">failing</Th>
            </tr>
          </thead>
          <tbody>
            {result.passes.map(({ pass, yield: share, low95, high95, outOfReach, failing }) => (
              <tr key={pass} className={pass === lastPass ? 'bg-shade' : ''}>
                <Td>{pass}</Td>
                <Td align="right">{percent(share)}</Td>
                <Td align="right">{`${fixed(low95 * 100, 3)} to ${percent(high95, 3)}`}</Td>
                <Td align="right">{percent(outOfReach)}</Td>
                <Td align="right">{percent(failing)}</Td>
              </tr>
            ))}
          </tbody>
        </Table>
        <p className="mt-1 text-small text-ink-3">
          Interval by Wilson. Failing: in reach, and the true remaining error over the tolerance.
        </p>
      </div>
    </div>
  )
}
