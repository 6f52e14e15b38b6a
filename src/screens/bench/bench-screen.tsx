import { useQuery } from '@tanstack/react-query'
import { useCallback } from 'react'
import { useSearchParams } from 'react-router-dom'
import { Choice } from '../../features/bench/head-fields.tsx'
import { designsOptions } from '../../features/bench/queries.ts'
import { type BenchSearch, readSearch, writeSearch } from '../../features/bench/search.ts'
import { Empty } from '../../ui/empty.tsx'
import { Loading } from '../../ui/loading.tsx'
import { PageHead } from '../../ui/page-head.tsx'
import { Problem } from '../../ui/problem.tsx'
import { BenchOfDesign } from './bench-of-design.tsx'

/** Bench: one unit from its readings to its recorded codes. The address holds everything but the readings. */
export default function BenchScreen() {
  const [params, setParams] = useSearchParams()
  const search = readSearch(params)
  const designs = useQuery(designsOptions)
  const change = useCallback(
    (part: Partial<BenchSearch>) => setParams((before) => writeSearch({ ...readSearch(before), ...part })),
    [setParams],
  )
  const items = designs.data?.items ?? []
  const only = items.length === 1 ? items[0]?.key : undefined
  const key = search.design ?? only
  if (key && designs.data)
    return <BenchOfDesign key={key} design={key} designs={items} search={search} change={change} />
  return (
    <>
      <PageHead place="Bench" title="Bench" />
      {designs.error ? (
        <Problem error={designs.error} />
      ) : !designs.data ? (
        <Loading>Reading the designs.</Loading>
      ) : items.length === 0 ? (
        <Empty>No design is open to you. An engineer writes one and another releases it.</Empty>
      ) : (
        <Empty>
          <p className="mb-3">Choose the design of the unit.</p>
          <Choice
            label="design"
            value=""
            onChange={(design) => change({ design })}
            options={[
              ['', 'say which'],
              ...items.map((one) => [one.key, `${one.key}, ${one.title}`] as const),
            ]}
          />
        </Empty>
      )}
    </>
  )
}
