import { Whole } from '../../ui/number-text.tsx'
import type { ProofStep } from './proof-steps.ts'

/** How many hashes above the leaf, and below the root, are drawn; those between are counted. */
const drawn = 2

/** The way from the leaf up to the signed root, each hash beside the one of the proof that it was put together with. */
export function ProofPath({
  steps,
  index,
  size,
}: {
  steps: readonly ProofStep[]
  index: number
  size: number
}) {
  const last = steps.length - 1
  const between = last - 1 - 2 * drawn
  const rows = steps.map((step, at) => ({ step, at })).reverse()
  return (
    <ol className="text-small" aria-label="From the signed root down to the leaf">
      {rows.map(({ step, at }) => {
        if (between > 0 && at > drawn && at < last - drawn) {
          return at === last - drawn - 1 ? (
            <li
              key={at}
              className="grid grid-cols-[5rem_1fr] gap-x-2 narrow:grid-cols-[6.5rem_1fr] narrow:gap-x-3"
            >
              <span />
              <span className="border-l border-dotted border-rule py-1 pl-3 text-ink-2">{between} more</span>
            </li>
          ) : null
        }
        return (
          <li
            key={at}
            className="grid grid-cols-[5rem_minmax(0,9rem)_minmax(0,9rem)] items-center gap-x-2 py-0.5 narrow:grid-cols-[6.5rem_minmax(0,9rem)_minmax(0,9rem)] narrow:gap-x-3"
          >
            <span className={`text-right ${at === 0 || at === last ? 'font-semibold' : 'text-ink-2'}`}>
              {nameOf(at, last, index, size)}
            </span>
            <Hash
              hex={step.own}
              look={at === 0 || at === last ? 'border-2 border-ink' : 'border border-ink-2'}
            />
            {step.sibling === null ? (
              <span />
            ) : (
              <span>
                <span className="sr-only">{step.siblingIsLeft ? 'behind ' : 'before '}</span>
                <Hash hex={step.sibling} look="border border-dotted border-ink-3 text-ink-2" />
              </span>
            )}
          </li>
        )
      })}
    </ol>
  )
}

function nameOf(at: number, last: number, index: number, size: number) {
  if (at === last) {
    return (
      <>
        root of <Whole value={size} />
      </>
    )
  }
  if (at > 0) return `after hash ${at}`
  return (
    <>
      leaf <Whole value={index} />
    </>
  )
}

/** The beginning, which is enough to compare by eye; the whole is in the proof file. */
function Hash({ hex, look }: { hex: string; look: string }) {
  return (
    <span className={`block max-w-36 overflow-hidden px-1.5 py-0.5 font-mono text-plot ${look}`} title={hex}>
      {hex.slice(0, 16)}
    </span>
  )
}
