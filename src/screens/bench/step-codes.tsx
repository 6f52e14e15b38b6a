import { CodesLeft } from '../../features/bench/codes-left.tsx'
import { CodesMissing, CodesPanel } from '../../features/bench/codes-panel.tsx'
import { Section } from '../../ui/section.tsx'
import type { BenchPageProps } from './bench-props.ts'
import { Numbered } from './step-found.tsx'
import type { BenchPageState } from './use-bench-page.ts'

/** Step 2: the codes, or what they wait for. */
export function StepCodes({ page, bench }: BenchPageProps & { page: BenchPageState }) {
  const { answer, applied } = page
  const trim = answer.answer?.trim ?? null
  if (page.loaded && bench.trim) {
    return (
      <Section heavy title={<Numbered n={2}>Codes loaded</Numbered>}>
        <CodesLeft codes={page.loaded} trimmers={bench.trim.trimmers} />
      </Section>
    )
  }
  return (
    <Section heavy title={<Numbered n={2}>Codes to load</Numbered>}>
      {trim && bench.trim && applied !== null ? (
        <CodesPanel
          trim={trim}
          trimmers={bench.trim.trimmers}
          applied={applied}
          appliedFrom={page.chain.length > 0 ? `pass ${page.pass - 1}` : 'applied'}
          isStale={answer.isStale}
        />
      ) : (
        <CodesMissing>{whatIsMissing(page, bench.trim !== null)}</CodesMissing>
      )}
    </Section>
  )
}

function whatIsMissing({ answer, applied }: BenchPageState, hasTrim: boolean): string {
  if (!hasTrim) return 'This design gives no codes.'
  if (answer.answer && applied === null) {
    return 'This unit has codes already. Say which codes were applied while measuring.'
  }
  return 'Codes stand here once two codes are measured.'
}
