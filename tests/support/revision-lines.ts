import type { RevisionLine } from '../../shared/contract/designs.ts'

/** A revision as the server answers it: saved once by its author, and nothing more, unless told otherwise. */
export function revisionLine(change: Partial<RevisionLine> = {}): RevisionLine {
  const { number = 1, author = 'M. Okafor', createdAt = '2026-02-20T09:00:00Z' } = change
  return {
    number,
    state: 'draft',
    title: 'Detector bias source, output A',
    author,
    createdAt,
    basedOn: null,
    writers: [{ kind: 'person', id: 'person-engineer', name: author }],
    savedBy: author,
    savedAt: createdAt,
    submittedBy: null,
    submittedAt: null,
    returnedBy: null,
    returnedAt: null,
    returnReason: null,
    releasedBy: null,
    releasedAt: null,
    releasedByAuthor: false,
    withdrawnBy: null,
    withdrawnAt: null,
    withdrawReason: null,
    hash: '0'.repeat(64),
    etag: `"${number}.1"`,
    ...change,
  }
}
