import type { ReactNode } from 'react'
import type { DesignLine } from '../../../shared/contract/designs.ts'
import { paths } from '../../lib/paths.ts'
import { LinkButton } from '../../ui/button.tsx'
import { None, RowHead, Table, Td, Th } from '../../ui/table.tsx'
import { TimeText } from '../../ui/time-text.tsx'
import { stateWord } from './state-word.ts'

type Drawn = (designKey: string, number: number) => ReactNode

export function DesignTable({
  designs,
  ladders,
}: {
  designs: readonly DesignLine[]
  /** Draws the answer of a revision: the released one, else the newest. */
  ladders: Drawn
}) {
  return (
    <Table caption="Designs by key">
      <thead>
        <tr>
          <Th>design</Th>
          <Th>title</Th>
          <Th className="hidden medium:table-cell">trim ladder</Th>
          <Th align="right">released</Th>
          <Th>newest revision</Th>
          <Th className="hidden medium:table-cell">released by</Th>
          <Th className="hidden medium:table-cell" unit="UTC">
            released at
          </Th>
        </tr>
      </thead>
      <tbody>
        {designs.map((design) => (
          <DesignRow key={design.key} design={design} ladders={ladders} />
        ))}
      </tbody>
    </Table>
  )
}

function DesignRow({ design, ladders }: { design: DesignLine; ladders: Drawn }) {
  const released = design.revisions.find((revision) => revision.number === design.released)
  const newest = design.revisions.reduce<DesignLine['revisions'][number] | undefined>(
    (last, revision) => (last && last.number > revision.number ? last : revision),
    undefined,
  )
  return (
    <tr className="focus-within:bg-shade hover:bg-shade">
      <RowHead>
        <LinkButton className="min-h-6" to={paths.design(design.key)}>
          {design.key}
        </LinkButton>
      </RowHead>
      <Td>{design.title}</Td>
      <Td className="hidden medium:table-cell">
        {newest ? ladders(design.key, design.released ?? newest.number) : <None />}
      </Td>
      <Td align="right">{design.released ?? <None />}</Td>
      <Td>{newest ? `${newest.number}, ${stateWord(newest.state)}` : <None />}</Td>
      <Td className="hidden medium:table-cell">{released?.releasedBy ?? <None />}</Td>
      <Td className="hidden text-ink-2 medium:table-cell">
        {released?.releasedAt ? <TimeText at={released.releasedAt} /> : <None />}
      </Td>
    </tr>
  )
}
