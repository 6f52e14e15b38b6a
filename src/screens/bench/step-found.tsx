import { useState } from 'react'
import { voltDecimals } from '../../features/bench/build-views.ts'
import { FitTable } from '../../features/bench/fit-table.tsx'
import { FoundTable } from '../../features/bench/found-table.tsx'
import { KeyHint } from '../../ui/key-hint.tsx'
import { Section } from '../../ui/section.tsx'
import { GridWithTools } from './grid-with-tools.tsx'
import type { StepProps } from './step-props.ts'

/** Step 1. In the first pass the grid; later the first pass as it was recorded. */
export function StepFound(props: StepProps) {
  const { page, bench } = props
  const { range } = bench.channel
  const first = page.chain[0]
  const [shown, setShown] = useState(first?.id)
  if (!first) {
    return (
      <Section
        heavy
        className="print:row-span-2"
        title={<Numbered n={1}>As found</Numbered>}
        side={<PasteHint isFixed={page.isFixed} />}
      >
        <GridWithTools {...props} />
        <FitOfPage {...props} />
      </Section>
    )
  }
  const record = page.chain.find((one) => one.id === shown) ?? first
  const title = record.id === first.id ? `As found, pass ${record.pass}` : `Pass ${record.pass}, as measured`
  return (
    <Section
      heavy
      className="print:row-span-2"
      title={<Numbered n={1}>{title}</Numbered>}
      side={
        page.chain.length > 1 ? (
          <span className="flex gap-2">
            {page.chain.map((one) => (
              <button
                key={one.id}
                type="button"
                aria-pressed={one.id === record.id}
                onClick={() => setShown(one.id)}
                className="min-h-6 underline underline-offset-4 aria-pressed:font-semibold aria-pressed:no-underline"
              >
                pass {one.pass}
              </button>
            ))}
          </span>
        ) : undefined
      }
    >
      <FoundTable fit={record.result.fit} decimals={voltDecimals(range.lsbV)} label={title} />
      <FitTable fit={record.result.fit} offsetAtV={range.x0} isStale={false} />
    </Section>
  )
}

export function Numbered({ n, children }: { n: number; children: string }) {
  return (
    <>
      <span className="mr-2">{n}</span>
      {children}
    </>
  )
}

export function PasteHint({ isFixed }: { isFixed: boolean }) {
  if (isFixed) return null
  return (
    <span className="hidden medium:inline print:hidden">
      <KeyHint keys="Ctrl V" /> takes a block
    </span>
  )
}

/** The line of what is on the page; the last good one, grey, while a cell is in error. */
export function FitOfPage({ page, bench }: Pick<StepProps, 'page' | 'bench'>) {
  const { answer } = page
  if (!answer.answer) return null
  return <FitTable fit={answer.answer.fit} offsetAtV={bench.channel.range.x0} isStale={answer.isStale} />
}
