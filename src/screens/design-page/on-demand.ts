import { lazy } from 'react'

// Asked for at once, beside the data, and not waited for by the form.
const parts = import('./answer-parts.tsx')
// Whoever draws them hears of a failure; it is nothing of its own.
parts.catch(() => undefined)

export const Verdicts = lazy(async () => ({ default: (await parts).Verdicts }))
export const LadderAndTables = lazy(async () => ({ default: (await parts).LadderAndTables }))

/** What stands under the fold or behind an act loads when it is first wanted. */
export const Lower = lazy(() => import('./lower.tsx'))
export const RevisionsPanel = lazy(() => import('./revisions-panel.tsx'))
export const ConflictBar = lazy(() => import('./conflict-bar.tsx'))
