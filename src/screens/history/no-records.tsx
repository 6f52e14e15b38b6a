import type { Filters } from '../../features/record/filters.ts'
import { paths } from '../../lib/paths.ts'
import { LinkButton } from '../../ui/button.tsx'
import { Empty } from '../../ui/empty.tsx'

export function NoRecords({ filters, older }: { filters: Filters; older: boolean }) {
  if (older) return <Empty>No older record.</Empty>
  if (Object.keys(filters).length > 0) {
    return (
      <Empty>
        No record matches.
        {filters.unit ? ` Unit ${filters.unit} has none here; case counts.` : ''}
        {filters.serial
          ? ` No serial here, and no part of one behind a dash, begins with ${filters.serial}; case counts.`
          : ''}
      </Empty>
    )
  }
  return (
    <Empty>
      No record yet. The first one comes from <LinkButton to={paths.bench}>Bench</LinkButton> or from{' '}
      <code className="font-mono text-body">ogee trim</code>.
    </Empty>
  )
}
