import { useQuery } from '@tanstack/react-query'
import { InstrumentForm } from '../../features/instrument/instrument-form.tsx'
import { InstrumentTable } from '../../features/instrument/instrument-table.tsx'
import { OverdueRule } from '../../features/instrument/overdue-rule.tsx'
import { instrumentsOptions } from '../../features/instrument/queries.ts'
import { usePerson } from '../../features/session/use-person.ts'
import { Empty } from '../../ui/empty.tsx'
import { Loading } from '../../ui/loading.tsx'
import { PageProblem } from '../../ui/page-problem.tsx'
import { Section } from '../../ui/section.tsx'
import { SettingsHead } from './settings-head.tsx'

/** Everybody sees what measured and when it is due; administrators keep it. */
export default function InstrumentsScreen() {
  const mayChange = usePerson().role === 'administrator'
  const list = useQuery(instrumentsOptions)
  if (list.error && !list.data) {
    return (
      <PageProblem
        place="Settings"
        what="Instruments"
        error={list.error}
        onRetry={() => void list.refetch()}
      />
    )
  }
  const { items, overdueAllowed } = list.data ?? { items: [], overdueAllowed: false }
  return (
    <>
      <SettingsHead title="Instruments" />
      {list.isPending ? <Loading>Reading the instruments.</Loading> : null}
      {list.data && items.length === 0 ? (
        <Empty>
          No instrument yet. Until one is named, a record takes the limits that its design states for the
          meter.
        </Empty>
      ) : null}
      {items.length > 0 ? (
        <InstrumentTable instruments={items} mayChange={mayChange} atMs={list.dataUpdatedAt} />
      ) : null}
      {list.data ? (
        <Section title="When one is overdue" className="mt-3.5">
          <OverdueRule allowed={overdueAllowed} mayChange={mayChange} />
        </Section>
      ) : null}
      {list.data && mayChange ? (
        <Section title="Add an instrument" className="mt-3.5">
          <InstrumentForm instrument={null} onDone={() => undefined} />
        </Section>
      ) : null}
    </>
  )
}
