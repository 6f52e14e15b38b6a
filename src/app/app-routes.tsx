import { lazy, Suspense } from 'react'
import { Route, Routes } from 'react-router-dom'
import { Loading } from '../ui/loading.tsx'

// Sign-in is the first page of many visits: the frame and all else load after it.
const Frame = lazy(() => import('./frame.tsx'))
const HomePage = lazy(() => import('./home-page.tsx'))
const NotFoundPage = lazy(() => import('./not-found-page.tsx'))
const SignIn = lazy(() => import('../screens/sign-in/sign-in-screen.tsx'))
const Setup = lazy(() => import('../screens/setup/setup-screen.tsx'))
const Bench = lazy(() => import('../screens/bench/bench-screen.tsx'))
const Designs = lazy(() => import('../screens/designs/designs-screen.tsx'))
const Design = lazy(() => import('../screens/designs/design-screen.tsx'))
const History = lazy(() => import('../screens/history/history-screen.tsx'))
const RecordPage = lazy(() => import('../screens/record/record-screen.tsx'))
const Ledger = lazy(() => import('../screens/ledger/ledger-screen.tsx'))
const Preferences = lazy(() => import('../screens/settings/preferences-screen.tsx'))
const Stations = lazy(() => import('../screens/settings/stations-screen.tsx'))
const Tokens = lazy(() => import('../screens/settings/tokens-screen.tsx'))

/** Every page has an address that restores it. Sign-in and set-up stand outside the frame. */
export function AppRoutes() {
  return (
    <Suspense fallback={<Loading page>Reading the page.</Loading>}>
      <Routes>
        <Route path="/sign-in" element={<SignIn />} />
        <Route path="/setup" element={<Setup />} />
        <Route element={<Frame />}>
          <Route index element={<HomePage />} />
          <Route path="/bench" element={<Bench />} />
          <Route path="/designs" element={<Designs />} />
          <Route path="/designs/:key" element={<Design />} />
          <Route path="/designs/:key/revisions/:number" element={<Design />} />
          <Route path="/history" element={<History />} />
          <Route path="/records/:id" element={<RecordPage />} />
          <Route path="/ledger" element={<Ledger />} />
          <Route path="/settings" element={<Preferences />} />
          <Route path="/settings/stations" element={<Stations />} />
          <Route path="/settings/tokens" element={<Tokens />} />
          <Route path="*" element={<NotFoundPage />} />
        </Route>
      </Routes>
    </Suspense>
  )
}
