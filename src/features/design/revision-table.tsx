import type { DesignLine } from '../../../shared/contract/designs.ts'
import { paths } from '../../lib/paths.ts'
import { LinkButton } from '../../ui/button.tsx'
import { None, RowHead, Table, Td, Th } from '../../ui/table.tsx'
import { TimeText } from '../../ui/time-text.tsx'
import { stateWord } from './state-word.ts'

/** Every revision with who wrote and who released it; the one on the page is shaded. */
export function RevisionTable({ design, shown }: { design: DesignLine; shown: number }) {
  const newestFirst = [...design.revisions].sort((a, b) => b.number - a.number)
  return (
    <Table caption={`Revisions of ${design.key}`}>
      <thead>
        <tr>
          <Th>revision</Th>
          <Th>state</Th>
          <Th>author</Th>
          <Th unit="UTC">written</Th>
          <Th>released by</Th>
          <Th unit="UTC">released</Th>
          <Th>SHA-256 of the document</Th>
        </tr>
      </thead>
      <tbody>
        {newestFirst.map((revision) => (
          <tr
            key={revision.number}
            aria-current={revision.number === shown ? 'true' : undefined}
            className={revision.number === shown ? 'bg-shade' : ''}
          >
            <RowHead>
              <LinkButton className="min-h-6" to={paths.design(design.key, revision.number)}>
                {`revision ${revision.number}`}
              </LinkButton>
            </RowHead>
            <Td>{stateWord(revision.state)}</Td>
            <Td>{revision.author}</Td>
            <Td className="text-ink-2">
              <TimeText at={revision.createdAt} />
            </Td>
            <Td>{revision.releasedBy ?? <None />}</Td>
            <Td className="text-ink-2">
              {revision.releasedAt ? <TimeText at={revision.releasedAt} /> : <None />}
            </Td>
            <Td className="max-w-40 overflow-hidden font-mono text-small text-ellipsis">
              <span title={revision.hash}>{revision.hash.slice(0, 16)}</span>
            </Td>
          </tr>
        ))}
      </tbody>
    </Table>
  )
}
