import { NumberText } from '../../ui/number-text.tsx'
import { RowHead, Table, Td, Th } from '../../ui/table.tsx'
import type { ProofRow } from './proof-parts.ts'

const width = 1000
const height = 46

/**
 * The older ledger as the beginning of the newer one, and below them the entries that each hash of the proof stands for. What
 * the picture shows, the table under it says.
 */
export function ProofPicture({ from, to, rows }: { from: number; to: number; rows: readonly ProofRow[] }) {
  const x = (entry: number) => (entry / to) * width
  return (
    <div className="mt-2">
      <svg
        viewBox={`0 0 ${width} ${height}`}
        preserveAspectRatio="none"
        className="h-12 w-full"
        role="img"
        aria-label={`The older ledger of ${from} entries is the beginning of the newer one of ${to}; ${rows.length} hashes stand for the parts.`}
      >
        <rect
          x="0.5"
          y="1"
          width={width - 1}
          height="16"
          className="fill-none stroke-rule"
          vectorEffect="non-scaling-stroke"
        />
        <rect x="0" y="1" width={x(from)} height="16" className="fill-ink" />
        {rows.map(({ first, last, where }) => (
          <rect
            key={first}
            x={x(first) + 0.5}
            y="24"
            width={Math.max(1.5, x(last + 1) - x(first) - 1)}
            height="14"
            className={where === 'older' ? 'fill-ink-3 stroke-ink' : 'fill-none stroke-ink'}
            vectorEffect="non-scaling-stroke"
          />
        ))}
      </svg>
      <p className="text-small text-ink-2">
        Above: the older ledger, filled, within the newer one. Below: what each hash of the proof stands for,
        filled where it is of the older ledger.
      </p>
      <Table caption="Hashes of the proof" className="mt-2">
        <thead>
          <tr>
            <Th>entries</Th>
            <Th>are in</Th>
            <Th>hash</Th>
          </tr>
        </thead>
        <tbody>
          {rows.map(({ first, last, where, hash }) => (
            <tr key={first}>
              <RowHead className="whitespace-nowrap">
                <NumberText>{String(first)}</NumberText>
                {last > first ? (
                  <>
                    {' to '}
                    <NumberText>{String(last)}</NumberText>
                  </>
                ) : null}
              </RowHead>
              <Td className="whitespace-nowrap">{where === 'older' ? 'both' : 'the newer only'}</Td>
              <Td className="font-mono text-small [overflow-wrap:anywhere]">{hash}</Td>
            </tr>
          ))}
        </tbody>
      </Table>
    </div>
  )
}
