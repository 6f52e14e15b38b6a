import type { ReactNode } from 'react'

const tones = { caution: 'border-caution', bad: 'border-bad', suspect: 'border-suspect', plain: 'border-ink' }

/** A sentence that must not be missed: a bar at its left, never a box. */
export function Caution({ tone = 'caution', children }: { tone?: keyof typeof tones; children: ReactNode }) {
  return <div className={`border-l-3 py-0.5 pl-2.5 text-body text-ink ${tones[tone]}`}>{children}</div>
}
