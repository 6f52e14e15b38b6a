import type { RecordLine } from '../../../shared/contract/record.ts'

const kinds = { trim: 'trim', verify: 'verify', override: 'override', withdraw: 'withdrawal' } as const

/** A trim with a pass over 1 is a refinement. */
export function kindWord(record: Pick<RecordLine, 'kind' | 'pass'>): string {
  return record.kind === 'trim' && record.pass > 1 ? 'refine' : kinds[record.kind]
}

export function kindSentence(record: Pick<RecordLine, 'kind' | 'pass'>): string {
  if (record.kind === 'verify') return `verification, pass ${record.pass}`
  return record.kind === 'trim' ? `${kindWord(record)}, pass ${record.pass}` : kinds[record.kind]
}

export function byText(by: string, station: string | null): string {
  // A token is often named for its station, which then need not be said twice.
  return station === null || by.includes(station) ? by : `${by}, ${station}`
}
