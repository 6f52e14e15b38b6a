import { useQuery } from '@tanstack/react-query'
import { useMemo, useState } from 'react'
import type { DesignLine, Revision } from '../../../shared/contract/designs.ts'
import { isOgeeError } from '../../../shared/errors.ts'
import { currentOf } from '../../features/bench/current.ts'
import { draftName, readDraft, writeDraft } from '../../features/bench/draft.ts'
import { hasReadings } from '../../features/bench/grid-state.ts'
import { Choice } from '../../features/bench/head-fields.tsx'
import { type Chain, chainOptions, revisionOptions, unitOptions } from '../../features/bench/queries.ts'
import type { BenchSearch } from '../../features/bench/search.ts'
import { prepareBench } from '../../features/bench/solve.ts'
import { Loading } from '../../ui/loading.tsx'
import { PageHead } from '../../ui/page-head.tsx'
import { Problem } from '../../ui/problem.tsx'
import { BenchPage } from './bench-page.tsx'
import type { Incoming } from './bench-props.ts'

type Change = (part: Partial<BenchSearch>) => void
type OfDesignProps = { design: string; designs: readonly DesignLine[]; search: BenchSearch; change: Change }

/** Reads the revision that the address names, released by default. */
export function BenchOfDesign({ design, designs, search, change }: OfDesignProps) {
  const revision = useQuery(revisionOptions(design, search.revision ?? 'released'))
  if (revision.data) {
    return <BenchOfUnit revision={revision.data} designs={designs} search={search} change={change} />
  }
  return (
    <>
      <PageHead place="Bench" title={design} />
      {revision.error ? (
        <>
          <Problem error={revision.error} />
          <div className="mt-3">
            <OtherDesign design={design} designs={designs} change={change} />
          </div>
          {isOgeeError(revision.error, 'not-found') ? (
            <p className="mt-2 text-body text-ink-2">
              Trims are recorded under released revisions. Choose a design that has one.
            </p>
          ) : null}
        </>
      ) : (
        <Loading>{`Reading design ${design}.`}</Loading>
      )}
    </>
  )
}

function OtherDesign({ design, designs, change }: Pick<OfDesignProps, 'design' | 'designs' | 'change'>) {
  const known = designs.some((one) => one.key === design)
  return (
    <Choice
      label="design"
      value={known ? design : ''}
      onChange={(key) =>
        change({ design: key, revision: null, range: null, channel: null, applied: null, follows: null })
      }
      options={[
        ...(known ? [] : [['', 'say which'] as const]),
        ...designs.map((one) => [one.key, `${one.key}, ${one.title}`] as const),
      ]}
    />
  )
}

const noChain: Chain = { followed: null, trims: [] }

type OfUnitProps = { revision: Revision; designs: readonly DesignLine[]; search: BenchSearch; change: Change }

/** What is known of the unit, and one page per measurement: another unit, range or pass is another draft. */
function BenchOfUnit({ revision, designs, search, change }: OfUnitProps) {
  const { document } = revision
  const range = document.ranges.find((one) => one.id === search.range)?.id ?? document.ranges[0]?.id ?? ''
  const channel = document.channels.find((one) => one === search.channel) ?? document.channels[0] ?? '1'
  const bench = useMemo(() => prepareBench(document, range), [document, range])
  const unit = useQuery({ ...unitOptions(revision.key, search.unit ?? ''), enabled: search.unit !== null })
  const chain = useQuery({ ...chainOptions(search.follows ?? ''), enabled: search.follows !== null })
  const [incoming, setIncoming] = useState<Incoming | null>(null)
  const [leftBehind, setLeftBehind] = useState<string | null>(null)
  const place = { design: revision.key, revision: revision.number, range, channel, follows: search.follows }
  const nameFor = (serial: string) => draftName({ ...place, unit: serial })
  const name = nameFor(search.unit ?? '')

  const changeUnit = (serial: string) => {
    const draft = readDraft(name)
    const target = draftName({ ...place, unit: serial, follows: null })
    // Readings typed before the unit was named belong to the unit that is named now.
    if (draft && search.unit === null && !readDraft(target)) {
      writeDraft(target, draft)
      writeDraft(name, null)
    }
    const stays = draft && search.unit !== null && draft.status.is === 'open' && hasReadings(draft.rows)
    setLeftBehind(stays ? search.unit : null)
    change({
      unit: serial === '' ? null : serial,
      follows: null,
      applied: search.unit === null ? search.applied : null,
    })
  }
  if (search.follows !== null && chain.isPending) {
    return (
      <>
        <PageHead place="Bench" title={`Unit ${search.unit ?? ''}`} />
        <Loading>Reading the passes before.</Loading>
      </>
    )
  }
  return (
    <BenchPage
      key={name}
      name={name}
      nameFor={(part) => draftName({ ...place, unit: search.unit ?? '', ...part })}
      revision={revision}
      designs={designs}
      bench={bench}
      range={range}
      channel={channel}
      search={search}
      change={change}
      changeUnit={changeUnit}
      known={{
        unit: unit.data ?? null,
        current: currentOf(unit.data, channel, range),
        isKnown: search.unit === null || unit.isSuccess,
        chain: (chain.data ?? noChain).trims,
        followed: (chain.data ?? noChain).followed,
        trouble: unit.error ?? chain.error,
      }}
      incoming={incoming?.name === name ? incoming : null}
      onIncoming={setIncoming}
      leftBehind={leftBehind}
    />
  )
}
