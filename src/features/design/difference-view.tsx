import { useQuery } from '@tanstack/react-query'
import type { DesignDifference } from '../../../shared/contract/revisions.ts'
import { Loading } from '../../ui/loading.tsx'
import { Problem } from '../../ui/problem.tsx'
import { None, RowHead, Table, Td, Th } from '../../ui/table.tsx'
import { differenceOptions } from './queries.ts'

/** Two revisions against each other, in words and numbers, with what it does to the answer. */
export function DifferenceView({ designKey, from, to }: { designKey: string; from: number; to: number }) {
  const { data, error } = useQuery(differenceOptions(designKey, from, to))
  if (error) return <Problem error={error} />
  if (!data) return <Loading>{`Comparing revision ${from} with ${to}.`}</Loading>
  if (data.changes.length === 0) {
    return <p className="text-body">{`Revisions ${from} and ${to} say the same.`}</p>
  }
  return (
    <>
      <Effects effects={data.effects} />
      <Table caption={`Differences from revision ${from} to ${to}`}>
        <thead>
          <tr>
            <Th>field</Th>
            <Th>{`revision ${from}`}</Th>
            <Th>{`revision ${to}`}</Th>
          </tr>
        </thead>
        <tbody>
          {data.changes.map((change) => (
            <tr key={`${change.kind} ${change.path}`}>
              <RowHead className="!font-normal">{change.label}</RowHead>
              <Td>{change.before ?? <None />}</Td>
              <Td>{change.after ?? <None />}</Td>
            </tr>
          ))}
        </tbody>
      </Table>
    </>
  )
}

function Effects({ effects }: { effects: DesignDifference['effects'] }) {
  return (
    <div className="mb-2 space-y-1 text-text">
      {effects.map(({ range, sentences }) => (
        <p key={range}>
          {effects.length > 1 ? `Range ${range}: ` : ''}
          {sentences.length > 0 ? sentences.join(' ') : 'The answer stays as it is.'}
        </p>
      ))}
    </div>
  )
}
