import { useQuery } from '@tanstack/react-query'
import { useParams } from 'react-router-dom'
import type { DesignLine, Revision } from '../../../shared/contract/designs.ts'
import { stateWord } from '../../features/design/design-table.tsx'
import { DocumentView } from '../../features/design/document-view.tsx'
import { designOptions, revisionOptions } from '../../features/design/queries.ts'
import { RevisionTable } from '../../features/design/revision-table.tsx'
import { paths } from '../../lib/paths.ts'
import { LinkButton } from '../../ui/button.tsx'
import { CopyButton } from '../../ui/copy-button.tsx'
import { Empty } from '../../ui/empty.tsx'
import { Loading } from '../../ui/loading.tsx'
import { PageHead } from '../../ui/page-head.tsx'
import { PageProblem } from '../../ui/page-problem.tsx'
import { Section } from '../../ui/section.tsx'
import { utcDay } from '../../ui/time-text.tsx'

/** One revision of a design, to read: the number in the address, else the released one, else the newest. */
export default function DesignScreen() {
  const { key = '', number } = useParams()
  const design = useQuery(designOptions(key))
  if (design.error && !design.data) {
    return (
      <PageProblem
        place="Designs"
        what={`Design ${key}`}
        error={design.error}
        onRetry={() => void design.refetch()}
      />
    )
  }
  if (!design.data) return <Loading page>{`Reading design ${key}.`}</Loading>
  const shown = whichRevision(design.data, number)
  if (shown === null) {
    return (
      <>
        <PageHead place={`Design ${key}`} title={design.data.title} />
        <Empty>Design {key} has no such revision.</Empty>
        <Section title="Revisions">
          <RevisionTable design={design.data} shown={0} />
        </Section>
      </>
    )
  }
  return <RevisionPage design={design.data} number={shown} />
}

function whichRevision(design: DesignLine, wanted: string | undefined): number | null {
  const numbers = design.revisions.map((revision) => revision.number)
  if (wanted === undefined || wanted === 'released') {
    return design.released ?? (numbers.length > 0 ? Math.max(...numbers) : null)
  }
  return numbers.find((number) => String(number) === wanted) ?? null
}

function RevisionPage({ design, number }: { design: DesignLine; number: number }) {
  const revision = useQuery(revisionOptions(design.key, number))
  const data = revision.data
  if (revision.error && !data) {
    return (
      <PageProblem
        place={`Design ${design.key}`}
        what={`Revision ${number}`}
        error={revision.error}
        onRetry={() => void revision.refetch()}
      />
    )
  }
  return (
    <>
      <PageHead
        place={`Design ${design.key}`}
        title={data?.title ?? design.title}
        state={data ? `revision ${number}, ${stateSentence(data)}` : `revision ${number}`}
        acts={
          <LinkButton look="primary" to={paths.benchFor({ design: design.key, revision: number })}>
            Open on Bench
          </LinkButton>
        }
      />
      {data ? (
        <div className="mt-3">
          <DocumentView design={data.document} />
        </div>
      ) : (
        <Loading>{`Reading revision ${number}.`}</Loading>
      )}
      <Section
        title="Revisions"
        className="mt-3.5"
        side={
          data ? (
            <CopyButton text={data.hash} what="hash of this revision">
              copy hash
            </CopyButton>
          ) : null
        }
      >
        <RevisionTable design={design} shown={number} />
      </Section>
    </>
  )
}

function stateSentence(revision: Revision): string {
  if (revision.releasedAt && revision.releasedBy && revision.state === 'released') {
    return `released by ${revision.releasedBy} on ${utcDay(revision.releasedAt)}. Released revisions do not change.`
  }
  return `${stateWord(revision.state)} by ${revision.author}`
}
