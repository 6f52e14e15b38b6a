import { lazy, Suspense, useEffect, useRef, useState } from 'react'
import { Outlet, useLocation, useNavigate } from 'react-router-dom'
import { useOutbox } from '../features/bench/outbox.ts'
import { useConnection } from '../lib/connection.ts'
import { installKeys, useKeys } from '../lib/keys.ts'
import { paths } from '../lib/paths.ts'
import { Loading } from '../ui/loading.tsx'
import { AwayBanner } from './away-banner.tsx'
import { ErrorBoundary } from './error-boundary.tsx'
import { KeysDialog } from './keys-dialog.tsx'
import { Rail } from './rail.tsx'
import { SessionDialog } from './session-dialog.tsx'

const OutboxSender = lazy(() => import('./outbox-sender.tsx'))

/** The frame round every page: rail, main part, banner of an outage, dialog of an ended session. */
export default function Frame() {
  const { pathname } = useLocation()
  const { sessionEnded } = useConnection()
  const [keysShown, setKeysShown] = useState(false)
  const main = useRef<HTMLElement>(null)
  // Bench sends what waits itself, and tells its own form how it ended.
  const hasWaiting = useOutbox().length > 0 && pathname !== paths.bench
  useFrameKeys(() => setKeysShown(true))
  useEffect(installKeys, [])
  useFocusOnNewPage(main, pathname)
  return (
    <div className="rail:flex">
      <a
        href="#main"
        className="sr-only focus:not-sr-only focus:absolute focus:top-1 focus:left-1 focus:z-20 focus:bg-paper focus:p-2"
      >
        Skip to the page
      </a>
      <Rail onShowKeys={() => setKeysShown(true)} />
      <main
        id="main"
        ref={main}
        tabIndex={-1}
        className="min-w-0 flex-1 px-4 py-3 rail:px-6 rail:py-4 print:p-0"
      >
        <AwayBanner />
        <ErrorBoundary key={pathname}>
          <Suspense fallback={<Loading page>Reading the page.</Loading>}>
            <Outlet />
          </Suspense>
        </ErrorBoundary>
      </main>
      {hasWaiting ? (
        <Suspense fallback={null}>
          <OutboxSender />
        </Suspense>
      ) : null}
      {sessionEnded ? <SessionDialog /> : null}
      {keysShown ? <KeysDialog onClose={() => setKeysShown(false)} /> : null}
    </div>
  )
}

function useFrameKeys(showKeys: () => void): void {
  const navigate = useNavigate()
  const go = (path: string) => () => void navigate(path)
  useKeys([
    { keys: 'g d', does: 'to Designs', run: go(paths.designs) },
    { keys: 'g b', does: 'to Bench', run: go(paths.bench) },
    { keys: 'g l', does: 'to Lots', run: go(paths.lots) },
    { keys: 'g h', does: 'to History', run: go(paths.history) },
    { keys: 'g g', does: 'to Ledger', run: go(paths.ledger) },
    { keys: 'g s', does: 'to Settings', run: go(paths.settings) },
    { keys: '?', does: 'list the keys of the page', run: showKeys },
  ])
}

/** Keyboard and speech start in the new page, unless the page has put the focus somewhere already. */
function useFocusOnNewPage(main: { current: HTMLElement | null }, pathname: string): void {
  const last = useRef(pathname)
  useEffect(() => {
    if (last.current === pathname) return
    last.current = pathname
    window.scrollTo(0, 0)
    if (!main.current?.contains(document.activeElement)) main.current?.focus({ preventScroll: true })
  }, [main, pathname])
}
