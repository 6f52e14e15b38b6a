import type { StoredCheckpoint } from '../../../shared/contract/ledger-checkpoints.ts'
import { Whole } from '../../ui/number-text.tsx'
import { RowHead, Table, Td, Th } from '../../ui/table.tsx'
import { TimeText } from '../../ui/time-text.tsx'

export type Sizes = { from: number | null; to: number | null }

/** A phone has no room for it, and what is to be chosen must be in view. */
const fromNarrow = 'hidden narrow:table-cell'

/** Checkpoints, newest first, each of which can be taken as the older or as the newer of two to compare. */
export function CheckpointTable({
  checkpoints,
  chosen,
  onChoose,
}: {
  checkpoints: readonly StoredCheckpoint[]
  chosen: Sizes
  onChoose: (change: Partial<Sizes>) => void
}) {
  return (
    <Table caption="Checkpoints, newest first">
      <thead>
        <tr>
          <Th align="right">number</Th>
          <Th align="right">entries</Th>
          <Th>signed, UTC</Th>
          <Th className={fromNarrow}>root</Th>
          <Th className="w-12">older</Th>
          <Th className="w-12">newer</Th>
        </tr>
      </thead>
      <tbody>
        {checkpoints.map(({ number, size, at, root }) => (
          <tr key={number}>
            <RowHead className="!text-right">
              <Whole value={number} />
            </RowHead>
            <Td align="right">
              <Whole value={size} />
            </Td>
            <Td>
              <TimeText at={at} />
            </Td>
            <Td className={`font-mono text-small ${fromNarrow}`}>{root.slice(0, 16)}</Td>
            {(['from', 'to'] as const).map((side) => (
              <Td key={side}>
                <Choice
                  side={side}
                  number={number}
                  checked={chosen[side] === size}
                  onChoose={() => onChoose({ [side]: size })}
                />
              </Td>
            ))}
          </tr>
        ))}
      </tbody>
    </Table>
  )
}

function Choice({
  side,
  number,
  checked,
  onChoose,
}: {
  side: 'from' | 'to'
  number: number
  checked: boolean
  onChoose: () => void
}) {
  return (
    <label className="flex size-6 cursor-pointer items-center">
      <input
        type="radio"
        name={`checkpoint-${side}`}
        checked={checked}
        onChange={onChoose}
        aria-label={`checkpoint ${number} as the ${side === 'from' ? 'older' : 'newer'} one`}
        className="size-4 cursor-pointer accent-ink"
      />
    </label>
  )
}
