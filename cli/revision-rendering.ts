import type { RevisionLine } from '../shared/contract/designs.ts'
import type { Rendering } from './output.ts'
import { pairs } from './table.ts'

/** What a command did to the revision that it prints. */
export type Done = 'created' | 'started' | 'saved' | 'submitted' | 'unchanged'

export function revisionRendering(key: string, line: RevisionLine, done: Done): Rendering {
  const { number, state, title, savedBy, savedAt, submittedBy, submittedAt, hash, etag } = line
  const rows: [string, string][] = [
    ['Design', `${key}, ${title}`],
    ['Revision', `${number}, ${state.replace('-', ' ')} (${done})`],
    ['Saved', `by ${savedBy} at ${savedAt}`],
    ...(submittedBy === null || state === 'draft'
      ? []
      : ([['Submitted', `by ${submittedBy} at ${submittedAt}`]] as [string, string][])),
    ['SHA-256', hash],
    ['ETag', etag],
  ]
  return {
    json: { format: 'ogee.revision/1', key, done, ...line },
    table: () => pairs(rows),
    csv: {
      heads: ['design', 'revision', 'state', 'done', 'saved_by', 'saved_at', 'hash', 'etag'],
      rows: [[key, number, state, done, savedBy, savedAt, hash, etag]],
    },
  }
}
