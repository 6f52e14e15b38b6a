/** Addresses of the pages, so that no screen spells one out. */
export const paths = {
  signIn: '/sign-in',
  setup: '/setup',
  designs: '/designs',
  design: (key: string, revision?: number | 'released') =>
    revision === undefined
      ? `/designs/${encodeURIComponent(key)}`
      : `/designs/${encodeURIComponent(key)}/revisions/${revision}`,
  newDesign: (key: string, template: string, title: string) =>
    `/designs/${encodeURIComponent(key)}${query({ template, title })}`,
  bench: '/bench',
  benchFor: (search: Record<string, string | number | undefined>) => `/bench${query(search)}`,
  lots: '/lots',
  lot: (design: string, lot: string) => `/lots/${encodeURIComponent(design)}/${encodeURIComponent(lot)}`,
  history: '/history',
  historyFor: (search: Record<string, string | undefined>) => `/history${query(search)}`,
  record: (id: string) => `/records/${id}`,
  ledger: '/ledger',
  settings: '/settings',
  instruments: '/settings/instruments',
  stations: '/settings/stations',
  tokens: '/settings/tokens',
} as const

function query(search: Record<string, string | number | undefined>): string {
  const params = new URLSearchParams()
  for (const [name, value] of Object.entries(search)) {
    if (value !== undefined && value !== '') params.set(name, String(value))
  }
  const text = params.toString()
  return text === '' ? '' : `?${text}`
}
