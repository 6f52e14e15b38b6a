import { useInfiniteQuery, useQuery } from '@tanstack/react-query'
import { designsOptions } from '../../features/design/queries.ts'
import { usePerson } from '../../features/session/use-person.ts'
import { stationsOptions } from '../../features/station/queries.ts'
import { CreateToken } from '../../features/token/create-token.tsx'
import { tokensOptions } from '../../features/token/queries.ts'
import { TokenTable } from '../../features/token/token-table.tsx'
import { Empty } from '../../ui/empty.tsx'
import { Loading } from '../../ui/loading.tsx'
import { Forbidden, PageProblem } from '../../ui/page-problem.tsx'
import { Section } from '../../ui/section.tsx'
import { SettingsHead } from './settings-head.tsx'

export default function TokensScreen() {
  const { role } = usePerson()
  if (role !== 'administrator') {
    return <Forbidden place="Settings" what="Tokens" role={role} needs="administrator" />
  }
  return <Tokens />
}

function Tokens() {
  const tokens = useQuery(tokensOptions)
  const stations = useQuery(stationsOptions)
  const designs = useInfiniteQuery(designsOptions)
  if (tokens.error && !tokens.data) {
    return (
      <PageProblem
        place="Settings"
        what="Tokens"
        error={tokens.error}
        onRetry={() => void tokens.refetch()}
      />
    )
  }
  return (
    <>
      <SettingsHead title="Tokens" />
      {tokens.isPending ? <Loading>Reading the tokens.</Loading> : null}
      {tokens.data?.items.length === 0 ? (
        <Empty>
          No token yet. Scripts use a token, not a password; it acts for a station and never for a person.
        </Empty>
      ) : null}
      {tokens.data && tokens.data.items.length > 0 ? <TokenTable tokens={tokens.data.items} /> : null}
      {tokens.data ? (
        <Section title="Make a token" className="mt-3.5">
          <CreateToken
            stations={stations.data?.items.filter((station) => station.retiredAt === null) ?? []}
            designs={designs.data?.pages.flatMap((page) => page.items.map((design) => design.key)) ?? []}
          />
        </Section>
      ) : null}
    </>
  )
}
