import { useInfiniteQuery } from '@tanstack/react-query'
import { lazy, Suspense, useState } from 'react'
import { useNavigate, useSearchParams } from 'react-router-dom'
import { lotState } from '../../../shared/contract/lots.ts'
import { designsOptions } from '../../features/design/queries.ts'
import { LotTable } from '../../features/lot/lot-table.tsx'
import { lotsOptions } from '../../features/lot/queries.ts'
import { stateWords } from '../../features/lot/words.ts'
import { usePerson } from '../../features/session/use-person.ts'
import { useKeys } from '../../lib/keys.ts'
import { paths } from '../../lib/paths.ts'
import { Button } from '../../ui/button.tsx'
import { Empty } from '../../ui/empty.tsx'
import { Field } from '../../ui/field.tsx'
import { Select } from '../../ui/input.tsx'
import { Loading } from '../../ui/loading.tsx'
import { PageHead } from '../../ui/page-head.tsx'
import { PageProblem } from '../../ui/page-problem.tsx'
import { useRowKeys } from '../../ui/use-row-keys.ts'

const OpenLotDialog = lazy(() => import('../../features/lot/open-lot-dialog.tsx'))

/** Lots, newest first; the address holds which design and state are shown. */
export default function LotsScreen() {
  const [search, setSearch] = useSearchParams()
  const { role } = usePerson()
  const navigate = useNavigate()
  const [isOpening, setOpening] = useState(false)
  const state = lotState.safeParse(search.get('state')).data
  const design = search.get('design') ?? undefined
  const lots = useInfiniteQuery(lotsOptions({ ...(design ? { design } : {}), ...(state ? { state } : {}) }))
  const designs = useInfiniteQuery(designsOptions)
  const items = lots.data?.pages.flatMap((page) => page.items) ?? []
  const rows = useRowKeys(items.length)
  const mayOpen = role === 'engineer' || role === 'operator'
  useKeys([
    { keys: 'j', does: 'next lot', run: () => rows.move(1) },
    { keys: 'k', does: 'previous lot', run: () => rows.move(-1) },
    { keys: 'Enter', does: 'open the lot', run: rows.open },
  ])
  if (lots.error && !lots.data) {
    return <PageProblem place="Ogee" what="Lots" error={lots.error} onRetry={() => void lots.refetch()} />
  }
  const lines = designs.data?.pages.flatMap((page) => page.items) ?? []
  const choose = (name: string, value: string) => {
    const to = new URLSearchParams(search)
    if (value === '') to.delete(name)
    else to.set(name, value)
    setSearch(to)
  }
  return (
    <>
      <PageHead
        place="Ogee"
        title="Lots"
        state="newest first"
        acts={
          mayOpen ? (
            <Button look="primary" onClick={() => setOpening(true)}>
              Open a lot
            </Button>
          ) : null
        }
      />
      <div className="my-2 flex flex-wrap gap-x-5 gap-y-1 print:hidden">
        <Field label="design" layout="inline">
          <Select value={design ?? ''} onChange={(event) => choose('design', event.target.value)}>
            <option value="">every</option>
            {lines.map(({ key }) => (
              <option key={key}>{key}</option>
            ))}
          </Select>
        </Field>
        <Field label="state" layout="inline">
          <Select value={state ?? ''} onChange={(event) => choose('state', event.target.value)}>
            <option value="">every</option>
            {lotState.options.map((one) => (
              <option key={one} value={one}>
                {stateWords[one]}
              </option>
            ))}
          </Select>
        </Field>
      </div>
      {isOpening ? (
        <Suspense fallback={null}>
          <OpenLotDialog
            designs={lines.filter(({ released }) => released !== null)}
            onOpened={(lot) => void navigate(paths.lot(lot.design, lot.key))}
            onClose={() => setOpening(false)}
          />
        </Suspense>
      ) : null}
      {lots.isPending ? <Loading>Reading the lots.</Loading> : null}
      {lots.data && items.length === 0 ? (
        <Empty>
          {search.size > 0 ? 'No lot matches. ' : 'No lot yet. '}
          {mayOpen ? (
            <>
              Open one here, or run: <code className="font-mono text-body">ogee lot open</code>.
            </>
          ) : null}
        </Empty>
      ) : null}
      {items.length > 0 ? <LotTable lots={items} row={rows.row} /> : null}
      {lots.hasNextPage ? (
        <Button className="mt-3" disabled={lots.isFetchingNextPage} onClick={() => void lots.fetchNextPage()}>
          Older lots
        </Button>
      ) : null}
    </>
  )
}
