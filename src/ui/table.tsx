import type { ComponentProps, ReactNode } from 'react'
import { useScrolls } from './use-scrolls.ts'

/** Rule under the head, hairlines under rows, nothing vertical. Scrolls sideways within itself when it must. */
export function Table({
  caption,
  className = '',
  children,
}: {
  /** Spoken, not shown: the section head says it to the eye. */
  caption: string
  className?: string
  children: ReactNode
}) {
  const [box, scrolls] = useScrolls()
  return (
    <div
      ref={box}
      // What is only spoken is placed in here, so that it cannot widen the page.
      className="relative overflow-x-auto"
      {...(scrolls ? { tabIndex: 0, role: 'region', 'aria-label': `${caption}, scrolls sideways` } : {})}
    >
      <table className={`w-full border-collapse text-body ${className}`}>
        <caption className="sr-only">{caption}</caption>
        {children}
      </table>
    </div>
  )
}

type Side = 'left' | 'right'
const sides: Record<Side, string> = { left: 'text-left', right: 'text-right' }

/** Column head, with the unit on a second line. */
export function Th({
  align = 'left',
  unit,
  className = '',
  children,
  ...rest
}: Omit<ComponentProps<'th'>, 'align'> & { align?: Side; unit?: ReactNode }) {
  return (
    <th
      scope="col"
      className={`border-b border-rule px-1.5 pb-1 align-bottom text-small font-medium first:pl-1.5 ${sides[align]} ${className}`}
      {...rest}
    >
      {children}
      {unit ? <span className="block">{unit}</span> : null}
    </th>
  )
}

export function Td({
  align = 'left',
  className = '',
  ...rest
}: Omit<ComponentProps<'td'>, 'align'> & { align?: Side }) {
  return (
    <td className={`h-6 border-b border-hair px-1.5 py-[2.5px] ${sides[align]} ${className}`} {...rest} />
  )
}

/** A row whose first cell names it. */
export function RowHead({ className = '', ...rest }: ComponentProps<'th'>) {
  return (
    <th
      scope="row"
      className={`h-6 border-b border-hair px-1.5 py-[2.5px] text-left font-medium ${className}`}
      {...rest}
    />
  )
}

/** A value that does not exist. An empty cell only ever means "not yet". */
export function None() {
  return <span className="text-ink-3">none</span>
}
