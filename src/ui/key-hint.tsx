import { Fragment } from 'react'

/** The keys of an act, drawn small. Hidden where there is no room and from speech: `?` lists them all. */
export function KeyHint({ keys, className = '' }: { keys: string; className?: string }) {
  const parts = keys.split(' ')
  return (
    <span
      aria-hidden="true"
      className={`hidden text-small text-ink-2 medium:inline print:hidden ${className}`}
    >
      {parts.map((key, i) => (
        // biome-ignore lint/suspicious/noArrayIndexKey: a fixed list
        <Fragment key={i}>
          {i > 0 ? ' ' : null}
          <kbd className="rounded-sm border border-rule px-1 font-mono text-plot">{key}</kbd>
        </Fragment>
      ))}
    </span>
  )
}
