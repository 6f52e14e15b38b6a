import type { Record as TrimRecord } from '../../../shared/contract/record.ts'
import type { Writing } from '../../features/finding/queries.ts'
import { WriteDialog } from '../../features/finding/write-dialog.tsx'

/** An auditor's finding on the record, or on the lot that it belongs to. */
export default function RecordFind({ record, onClose }: { record: TrimRecord; onClose: () => void }) {
  return <WriteDialog draft={record.id} choices={subjectsOf(record)} onClose={onClose} />
}

function subjectsOf({ id, number, design, lot }: TrimRecord): (readonly [string, Writing])[] {
  const one = [`record ${number}`, { act: 'find', subject: { kind: 'record', record: id } }] as const
  if (lot === null) return [one]
  return [one, [`lot ${lot} of ${design}`, { act: 'find', subject: { kind: 'lot', design, lot } }] as const]
}
