import type { DesignLine, Revision } from '../../../shared/contract/designs.ts'
import type { Unit } from '../../../shared/contract/units.ts'
import type { CurrentCodes } from '../../features/bench/current.ts'
import type { DraftPlace } from '../../features/bench/draft.ts'
import type { Row } from '../../features/bench/grid-state.ts'
import type { Chain, TrimRecord } from '../../features/bench/queries.ts'
import type { BenchSearch } from '../../features/bench/search.ts'
import type { Bench } from '../../features/bench/solve.ts'

/** Points that a file brought for a measurement whose page is about to open. */
export type Incoming = {
  name: string
  rows: readonly Row[]
  hasU: boolean
  /** Named by the file. */
  instrument: string | null
}

export type BenchPageProps = {
  name: string
  nameFor: (part: Partial<DraftPlace>) => string
  revision: Revision
  designs: readonly DesignLine[]
  bench: Bench
  range: string
  channel: string
  search: BenchSearch
  change: (part: Partial<BenchSearch>) => void
  changeUnit: (serial: string) => void
  known: {
    unit: Unit | null
    current: CurrentCodes | null
    isKnown: boolean
    chain: readonly TrimRecord[]
    /** The record that this measurement goes on from, a verification perhaps. */
    followed: Chain['followed']
    trouble: unknown
  }
  incoming: Incoming | null
  onIncoming: (incoming: Incoming | null) => void
  leftBehind: string | null
}
