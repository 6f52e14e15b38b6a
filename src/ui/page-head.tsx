import { type ReactNode, useEffect } from 'react'

/** What the page is, its state, its acts. Also names the browser's tab. */
export function PageHead({
  place,
  title,
  state,
  acts,
  tab,
}: {
  /** The small line above: "History", "Record 1 004 317 · verification". */
  place: ReactNode
  title: ReactNode
  state?: ReactNode
  acts?: ReactNode
  /** Name of the browser's tab, where the title is not plain text. */
  tab?: string
}) {
  const name = tab ?? (typeof title === 'string' ? title : undefined)
  useEffect(() => {
    document.title = name ? `${name} · Ogee` : 'Ogee'
  }, [name])
  return (
    <header className="border-b-2 border-ink pb-1.5">
      <p className="text-small text-ink-2">{place}</p>
      <div className="flex flex-wrap items-end justify-between gap-x-6 gap-y-2">
        <div className="flex min-w-0 flex-1 basis-48 flex-wrap medium:basis-[28rem] items-baseline gap-x-6">
          <h1
            tabIndex={-1}
            className="text-title-narrow font-medium narrow:text-title [overflow-wrap:anywhere]"
          >
            {title}
          </h1>
          {state ? <div className="text-body text-ink-2">{state}</div> : null}
        </div>
        {acts ? (
          <div className="ml-auto flex flex-wrap items-center gap-x-3 gap-y-2 print:hidden">{acts}</div>
        ) : null}
      </div>
    </header>
  )
}
