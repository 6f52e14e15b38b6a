import { type ComponentProps, lazy, Suspense } from 'react'

/** Dialogs and panels that most measurements never show; each loads when it is first asked for. */

const Ideal = lazy(async () => ({ default: (await import('./ideal-dialog.tsx')).IdealDialog }))
const Readings = lazy(async () => ({ default: (await import('./readings-dialog.tsx')).ReadingsDialog }))
const Choose = lazy(async () => ({ default: (await import('./points-file-dialog.tsx')).ChooseMeasurement }))
const Trouble = lazy(async () => ({ default: (await import('./points-file-dialog.tsx')).FileTrouble }))
const Shortfall = lazy(async () => ({ default: (await import('./shortfall-table.tsx')).ShortfallTable }))
const Suspect = lazy(async () => ({ default: (await import('./suspect-panel.tsx')).SuspectPanel }))

export const IdealDialog = (props: ComponentProps<typeof Ideal>) => (
  <Suspense fallback={null}>
    <Ideal {...props} />
  </Suspense>
)
export const ReadingsDialog = (props: ComponentProps<typeof Readings>) => (
  <Suspense fallback={null}>
    <Readings {...props} />
  </Suspense>
)
export const ChooseMeasurement = (props: ComponentProps<typeof Choose>) => (
  <Suspense fallback={null}>
    <Choose {...props} />
  </Suspense>
)
export const FileTrouble = (props: ComponentProps<typeof Trouble>) => (
  <Suspense fallback={null}>
    <Trouble {...props} />
  </Suspense>
)
export const ShortfallTable = (props: ComponentProps<typeof Shortfall>) => (
  <Suspense fallback={null}>
    <Shortfall {...props} />
  </Suspense>
)
export const SuspectPanel = (props: ComponentProps<typeof Suspect>) => (
  <Suspense fallback={null}>
    <Suspect {...props} />
  </Suspense>
)
