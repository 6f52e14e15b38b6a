import { lazy } from 'react'

/** What stands under the fold or behind an act loads when it is first wanted. */
export const RevisionsPanel = lazy(() => import('./revisions-panel.tsx'))
export const ConflictBar = lazy(() => import('./conflict-bar.tsx'))
export const DocumentActs = lazy(() => import('./document-acts.tsx'))
export const MeasuredUnits = lazy(() => import('./measured-units.tsx'))
export const StateActs = lazy(() => import('./state-acts.tsx'))
export const TriedNotice = lazy(() => import('./tried-notice.tsx'))
