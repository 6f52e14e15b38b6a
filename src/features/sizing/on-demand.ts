import { lazy } from 'react'

/** Simulation loads when its panel is first on the page, its worker with the first run. */
export const YieldPanel = lazy(() => import('./yield-panel.tsx'))
