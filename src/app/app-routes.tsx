import { lazy, Suspense } from 'react'
import { Route, Routes } from 'react-router-dom'
import { Loading } from '../ui/loading.tsx'
import { load } from './screens.ts'

// Sign-in is the first page of many visits: the frame and all else load after it.
const Gate = lazy(() => import('./gate.tsx'))
const HomePage = lazy(() => import('./home-page.tsx'))
const NotFoundPage = lazy(() => import('./not-found-page.tsx'))
const SignIn = lazy(() => import('../screens/sign-in/sign-in-screen.tsx'))
const Setup = lazy(() => import('../screens/setup/setup-screen.tsx'))
const Bench = lazy(load.bench)
const Designs = lazy(load.designs)
const Design = lazy(load.design)
const Lots = lazy(load.lots)
const Lot = lazy(load.lot)
const History = lazy(load.history)
const RecordPage = lazy(load.record)
const Ledger = lazy(load.ledger)
const Preferences = lazy(load.preferences)
const Instruments = lazy(load.instruments)
const Stations = lazy(load.stations)
const Tokens = lazy(load.tokens)

/** Every page has an address that restores it. Sign-in and set-up stand outside the frame. */
export function AppRoutes() {
  return (
    <Suspense fallback={<Loading page>Reading the page.</Loading>}>
      <Routes>
        <Route path="/sign-in" element={<SignIn />} />
        <Route path="/setup" element={<Setup />} />
        <Route element={<Gate />}>
          <Route index element={<HomePage />} />
          <Route path="/bench" element={<Bench />} />
          <Route path="/designs" element={<Designs />} />
          <Route path="/designs/:key" element={<Design />} />
          <Route path="/designs/:key/revisions/:number" element={<Design />} />
          <Route path="/lots" element={<Lots />} />
          <Route path="/lots/:design/:lot" element={<Lot />} />
          <Route path="/history" element={<History />} />
          <Route path="/records/:id" element={<RecordPage />} />
          <Route path="/ledger" element={<Ledger />} />
          <Route path="/settings" element={<Preferences />} />
          <Route path="/settings/instruments" element={<Instruments />} />
          <Route path="/settings/stations" element={<Stations />} />
          <Route path="/settings/tokens" element={<Tokens />} />
          <Route path="*" element={<NotFoundPage />} />
        </Route>
      </Routes>
    </Suspense>
  )
}
