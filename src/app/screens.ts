/** The files of the pages, each loaded when its page is first wanted. */
export const load = {
  bench: () => import('../screens/bench/bench-screen.tsx'),
  designs: () => import('../screens/designs/designs-screen.tsx'),
  design: () => import('../screens/designs/design-screen.tsx'),
  lots: () => import('../screens/lots/lots-screen.tsx'),
  lot: () => import('../screens/lots/lot-screen.tsx'),
  history: () => import('../screens/history/history-screen.tsx'),
  record: () => import('../screens/record/record-screen.tsx'),
  ledger: () => import('../screens/ledger/ledger-screen.tsx'),
  preferences: () => import('../screens/settings/preferences-screen.tsx'),
  instruments: () => import('../screens/settings/instruments-screen.tsx'),
  stations: () => import('../screens/settings/stations-screen.tsx'),
  tokens: () => import('../screens/settings/tokens-screen.tsx'),
}

const byPath: readonly (readonly [RegExp, () => Promise<unknown>])[] = [
  [/^\/bench$/, load.bench],
  [/^\/designs$/, load.designs],
  [/^\/designs\//, load.design],
  [/^\/lots$/, load.lots],
  [/^\/lots\//, load.lot],
  [/^\/history$/, load.history],
  [/^\/records\//, load.record],
  [/^\/ledger$/, load.ledger],
  [/^\/settings\/instruments$/, load.instruments],
  [/^\/settings\/stations$/, load.stations],
  [/^\/settings\/tokens$/, load.tokens],
]

/** Starts loading the page of an address beside the frame and not after it. A failure shows when the page is drawn. */
export function loadAhead(pathname: string): void {
  byPath
    .find(([path]) => path.test(pathname))?.[1]()
    .catch(() => undefined)
}
