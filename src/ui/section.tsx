import { type ReactNode, useId } from 'react'

/** A part of the page on its section line; Bench's numbered steps take the heavy line. */
export function Section({
  title,
  note,
  side,
  heavy = false,
  className = '',
  children,
}: {
  title: ReactNode
  /** Said after the title, in ink-3. */
  note?: ReactNode
  /** At the right end of the line. */
  side?: ReactNode
  heavy?: boolean
  className?: string
  children: ReactNode
}) {
  const id = useId()
  return (
    <section
      aria-labelledby={id}
      className={`min-w-0 pt-1.5 ${heavy ? 'border-t-2 border-ink' : 'border-t border-rule'} ${className}`}
    >
      <div className="mb-1.5 flex min-h-6 flex-wrap items-center justify-between gap-x-4">
        <div className="flex flex-wrap items-baseline gap-x-3">
          <h2 id={id} className="text-body font-semibold">
            {title}
          </h2>
          {note ? <span className="text-small text-ink-3">{note}</span> : null}
        </div>
        {side ? <div className="text-small text-ink-2">{side}</div> : null}
      </div>
      {children}
    </section>
  )
}

/** Names and values in two columns; a value may be anything. */
export function Facts({ children }: { children: ReactNode }) {
  return (
    <dl className="grid grid-cols-[minmax(5rem,7.5rem)_1fr] items-baseline gap-x-3 gap-y-0.5 text-body leading-5 [&>dd]:min-w-0 [&>dd]:[overflow-wrap:anywhere] [&>dt]:text-ink-2">
      {children}
    </dl>
  )
}

export function Fact({ name, children }: { name: ReactNode; children: ReactNode }) {
  return (
    <>
      <dt>{name}</dt>
      <dd>{children}</dd>
    </>
  )
}
