import { isOgeeError } from '../../../shared/errors.ts'
import type { CsvProblem, PointGroup } from '../../../shared/points/group.ts'
import type { PointsCsv } from '../../../shared/points/parse-csv.ts'
import { Button } from '../../ui/button.tsx'
import { Caution } from '../../ui/caution.tsx'
import { Dialog } from '../../ui/dialog.tsx'

type ChooseProps = {
  file: PointsCsv
  name: string
  onChoose: (group: PointGroup) => void
  onClose: () => void
}

const shownMost = 8

/** A file with several measurements, or with rows that cannot be taken: a person says which goes in. */
export function ChooseMeasurement({ file, name, onChoose, onClose }: ChooseProps) {
  const { groups, problems } = file
  return (
    <Dialog title={`Points in ${name}`} onClose={onClose}>
      <FileProblems problems={problems} />
      {groups.length === 0 ? (
        <p className="text-text">
          No measurement of this file can be taken. What stood in the grid still stands.
        </p>
      ) : (
        <>
          <p className="mb-2 text-text">
            {groups.length === 1
              ? 'One measurement is good.'
              : `${groups.length} measurements. Which one goes into the grid?`}
          </p>
          <ul className="max-h-72 overflow-y-auto">
            {groups.map((group) => (
              <li key={group.firstLine} className="border-b border-hair">
                <Button look="quiet" className="w-full" onClick={() => onChoose(group)}>
                  {titleOf(group)}
                </Button>
              </li>
            ))}
          </ul>
        </>
      )}
      <Button className="mt-3" onClick={onClose}>
        Close
      </Button>
    </Dialog>
  )
}

function titleOf(group: PointGroup): string {
  const parts = [
    group.unit ? `unit ${group.unit}` : 'no unit named',
    group.channel ? `channel ${group.channel}` : null,
    group.range ? `range ${group.range}` : null,
    `${group.points.length} points`,
    `lines ${group.firstLine} to ${group.lastLine}`,
  ]
  return parts.filter((part) => part !== null).join(', ')
}

function FileProblems({ problems }: { problems: readonly CsvProblem[] }) {
  if (problems.length === 0) return null
  return (
    <div role="alert" className="mb-3">
      <Caution tone="bad">
        {problems.slice(0, shownMost).map((problem) => (
          <p key={`${problem.line} ${problem.column} ${problem.message}`}>{problem.message}</p>
        ))}
        {problems.length > shownMost ? <p>{problems.length - shownMost} more places.</p> : null}
      </Caution>
    </div>
  )
}

/** A file that could not be read at all. The grid is as it was. */
export function FileTrouble({ error, onDismiss }: { error: unknown; onDismiss: () => void }) {
  const sentence = isOgeeError(error) ? error.message : 'The file could not be read.'
  return (
    <div role="alert" className="mt-2">
      <Caution tone="bad">
        <p>{sentence} Nothing in the grid was changed.</p>
        <Button look="quiet" onClick={onDismiss}>
          Understood
        </Button>
      </Caution>
    </div>
  )
}
