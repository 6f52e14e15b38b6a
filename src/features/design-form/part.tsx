import type { ReactNode } from 'react'
import { Section } from '../../ui/section.tsx'

/** A part of the form; its number is the key that jumps to it. */
export function Part({
  number,
  title,
  side,
  problem,
  children,
}: {
  number: number
  title: string
  side?: ReactNode
  problem?: string | undefined
  children: ReactNode
}) {
  return (
    <div data-part={number}>
      <Section title={title} side={side}>
        {children}
        {problem ? (
          <p role="alert" className="mt-1 text-small text-bad">
            {problem}
          </p>
        ) : null}
      </Section>
    </div>
  )
}

/** Puts the focus on the first field of a part, as `1` to `5` do. */
export function jumpToPart(number: number): void {
  const part = document.querySelector<HTMLElement>(`[data-part="${number}"]`)
  const target = part?.querySelector<HTMLElement>('[data-field]') ?? part
  target?.focus()
}
