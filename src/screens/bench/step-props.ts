import type { BenchPageProps } from './bench-props.ts'
import type { BenchActs } from './use-bench-acts.ts'
import type { BenchPageState } from './use-bench-page.ts'

/** What each part of the page sees of the whole. */
export type StepProps = BenchPageProps & { page: BenchPageState; acts: BenchActs }
