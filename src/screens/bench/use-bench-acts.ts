import { useQueryClient } from '@tanstack/react-query'
import { useState } from 'react'
import { copyKeys } from '../../features/bench/codes-panel.tsx'
import { recordOptions } from '../../features/bench/queries.ts'
import { type Binding, useKeys, useScan } from '../../lib/keys.ts'
import { copyText } from '../../ui/clipboard.ts'
import { announce } from '../../ui/status.tsx'
import type { BenchPageProps } from './bench-props.ts'
import { findStop } from './stops.ts'
import { type BenchPageState, missingForRecord } from './use-bench-page.ts'

type Shown = { toggleTable: () => void; showIdeal: () => void }

/** What can be done on the page, by button and by key. */
export function useBenchActs(props: BenchPageProps, page: BenchPageState, shown: Shown) {
  const { search, change, known } = props
  const client = useQueryClient()
  const [unitTrouble, setUnitTrouble] = useState<string | null>(null)
  const { recording, answer } = page
  const primary = primaryRecord(page)
  const missing = missingForRecord(page, search.unit, primary)

  const recordAs = (as: 'trim' | 'verify', reason: string | null) => {
    if (recording.recorded !== null || recording.waiting !== null) return
    const body = page.body(as)
    const lacks = missingForRecord(page, search.unit, as)
    if (lacks !== null || body === null) {
      announce(lacks ?? 'Nothing to record yet.')
      setUnitTrouble(search.unit === null && page.shut === null ? 'Unit is missing.' : null)
      if (search.unit === null && page.shut === null) findStop('unit')?.focus()
      return
    }
    page.flush()
    // Said in the address from here on: once recorded the unit has codes, and nothing said would mean something else.
    if (search.applied === null) change({ applied: page.applied })
    void recording.record(body, reason)
  }
  const record = (reason: string | null) => recordAs('trim', reason)
  const recordLeft = () => recordAs('verify', null)
  /** The pass after this one: measured with the codes that were just recorded, or with those that the unit has. */
  const next = nextPass(props, page, (id) => client.getQueryData(recordOptions(id).queryKey))
  const goNext = () => {
    if (next) change({ follows: next.follows, applied: next.applied })
  }
  const changeUnit = (serial: string) => {
    setUnitTrouble(null)
    page.flush()
    props.changeUnit(serial)
  }
  const copy = (which: 'gain' | 'offset') => () => {
    const codes = page.loaded ?? (answer.isStale ? null : answer.answer?.trim?.codes)
    const code = codes?.[which]
    if (code === undefined) announce(`There is no ${which} code yet.`)
    else void copyText(String(code), `Copied ${which} code ${code}.`)
  }
  const readFirst = () => {
    const row = page.grid.rows.findIndex((one) => one.measured.trim() === '')
    page.dispatch({ do: 'focus', place: { row: Math.max(0, row), column: 'measured' } })
    findStop(`cell-${Math.max(0, row)}`)?.focus()
  }
  const bindings: Binding[] = [
    { keys: copyKeys.gain, does: 'copy the gain code', run: copy('gain') },
    { keys: copyKeys.offset, does: 'copy the offset code', run: copy('offset') },
    { keys: 'o', does: 'copy the offset code', run: copy('offset') },
    { keys: 'Ctrl+Enter', does: 'record', run: () => recordAs(primary, null) },
    { keys: 'p', does: 'next pass', run: goNext },
    { keys: 'i', does: 'ideal values', run: shown.showIdeal },
    { keys: 't', does: 'plots as tables', run: shown.toggleTable },
    { keys: 'm', does: 'to the first reading that is missing', run: readFirst },
    { keys: 'u', does: 'to the unit', run: () => findStop('unit')?.focus() },
  ]
  useKeys(bindings)
  useScan(changeUnit)
  return {
    record,
    recordLeft,
    primary,
    missing,
    next,
    goNext,
    changeUnit,
    unitTrouble,
    showIdeal: shown.showIdeal,
    knownCurrent: known.current,
  }
}

export type BenchActs = ReturnType<typeof useBenchActs>

/** As left while it passes; where it does not, the codes that these points lead to. */
function primaryRecord({ left }: BenchPageState): 'trim' | 'verify' {
  return left?.outcome === 'pass' || left?.outcome === 'conditional-pass' ? 'verify' : 'trim'
}

function nextPass(
  { known, search }: BenchPageProps,
  page: BenchPageState,
  stored: (id: string) => { result: unknown } | undefined,
) {
  const { recorded } = page.recording
  if (recorded?.kind === 'verify') {
    const { applied } = page
    return applied === null || applied === 'neutral'
      ? null
      : { follows: recorded.id, applied, pass: page.pass }
  }
  if (recorded) {
    const result = stored(recorded.id)?.result as
      | { trim?: { codes?: { gain?: number; offset?: number } | null } }
      | undefined
    const codes = result?.trim?.codes ?? page.answer.answer?.trim?.codes ?? null
    return recorded.accepted && codes ? { follows: recorded.id, applied: codes, pass: page.pass + 1 } : null
  }
  const { current } = known
  if (search.follows !== null || page.hasReadings || !current?.codes || !current.record) return null
  return { follows: current.record, applied: current.codes, pass: current.pass + 1 }
}
