import { useQuery } from '@tanstack/react-query'
import { usePerson } from '../../features/session/use-person.ts'
import { AddStation } from '../../features/station/add-station.tsx'
import { stationsOptions } from '../../features/station/queries.ts'
import { StationTable } from '../../features/station/station-table.tsx'
import { Empty } from '../../ui/empty.tsx'
import { Loading } from '../../ui/loading.tsx'
import { Forbidden, PageProblem } from '../../ui/page-problem.tsx'
import { Section } from '../../ui/section.tsx'
import { SettingsHead } from './settings-head.tsx'

export default function StationsScreen() {
  const { role } = usePerson()
  if (role !== 'administrator') {
    return <Forbidden place="Settings" what="Stations" role={role} needs="administrator" />
  }
  return <Stations />
}

function Stations() {
  const stations = useQuery(stationsOptions)
  if (stations.error && !stations.data) {
    return (
      <PageProblem
        place="Settings"
        what="Stations"
        error={stations.error}
        onRetry={() => void stations.refetch()}
      />
    )
  }
  return (
    <>
      <SettingsHead title="Stations" />
      {stations.isPending ? <Loading>Reading the stations.</Loading> : null}
      {stations.data?.items.length === 0 ? (
        <Empty>No station yet. A station is where units are measured; its tokens record for it.</Empty>
      ) : null}
      {stations.data && stations.data.items.length > 0 ? (
        <StationTable stations={stations.data.items} />
      ) : null}
      {stations.data ? (
        <Section title="Add a station" className="mt-3.5">
          <AddStation />
        </Section>
      ) : null}
    </>
  )
}
