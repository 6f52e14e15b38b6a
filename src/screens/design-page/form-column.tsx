import { Suspense, useMemo, useState } from 'react'
import { limitInVolts } from '../../features/design/words.ts'
import { AdjustersPart } from '../../features/design-form/adjusters-part.tsx'
import { BudgetPart, type Sums } from '../../features/design-form/budget-part.tsx'
import { ChannelPart, type RangeHint } from '../../features/design-form/channel-part.tsx'
import { type Hints, MeasurementPart, SizingPart } from '../../features/design-form/plan-parts.tsx'
import { Button } from '../../ui/button.tsx'
import { Loading } from '../../ui/loading.tsx'
import { engineering, significant } from '../../ui/number-format.ts'
import { WhenNear } from '../../ui/when-near.tsx'
import type { Answer } from './answer.ts'
import { DocumentActs, MeasuredUnits } from './on-demand.ts'
import type { DesignPageState } from './use-design-page.ts'

/** The form in the order of the signal path, in two columns where there is room for two and one where not. */
export function FormColumn({ page }: { page: DesignPageState }) {
  const { doc } = page.form
  const { said, answer } = page.answered
  const hints = useMemo(() => hintsOf(answer), [answer])
  return (
    <div className="grid grid-cols-1 gap-x-7 gap-y-3.5 medium:grid-cols-2 wide:grid-cols-1 print:grid-cols-2">
      <div className="min-w-0 space-y-3.5">
        <ChannelPart ranges={doc.ranges} said={said} hints={hints.ranges} />
        <AdjustersPart doc={doc} said={said} />
      </div>
      <div className="min-w-0 space-y-3.5">
        <BudgetPart lines={doc.lines} said={said} sums={hints.sums}>
          <Measured page={page} />
        </BudgetPart>
        <SizingPart said={said} hints={hints.plan} />
        <MeasurementPart isRuled={(doc.values.rule ?? '') !== ''} said={said} hints={hints.plan} />
        <WhenNear name="document" minHeight={64}>
          <Suspense fallback={null}>
            <DocumentActs page={page} />
          </Suspense>
        </WhenNear>
      </div>
    </div>
  )
}

/** What it takes to read and fit units loads with the wish for it. */
function Measured({ page }: { page: DesignPageState }) {
  const [isOpen, setOpen] = useState(false)
  if (!isOpen) {
    return (
      <Button look="quiet" className="text-small print:hidden" onClick={() => setOpen(true)}>
        take extents from measured units
      </Button>
    )
  }
  return (
    <Suspense fallback={<Loading>Loading what reads points.</Loading>}>
      <MeasuredUnits page={page} onClose={() => setOpen(false)} />
    </Suspense>
  )
}

const noSums: Sums = { gain: null, offset: null, units: null }

/** What was understood, of the last good answer. */
function hintsOf(answer: Answer | null): {
  ranges: readonly (RangeHint | null)[]
  plan: Hints
  sums: Sums
} {
  if (answer === null) return { ranges: [], plan: {}, sums: noSums }
  const { design, size } = answer
  const { bits, inlLsb } = design.converter
  const range = design.ranges.find(({ id }) => id === size.range)!
  const inVolts = (limit: Parameters<typeof limitInVolts>[0]) => {
    const volts = limitInVolts(limit, range, bits)
    const ppm = `${significant((volts / answer.fsrV) * 1e6, 3)} ppm`
    return limit.unit === 'ppm'
      ? engineering(volts, 'V')
      : limit.unit === 'V'
        ? ppm
        : `${engineering(volts, 'V')}, ${ppm}`
  }
  const { gain, offset } = size.extents
  return {
    ranges: design.ranges.map(({ lowV, highV }) => {
      const lsbV = (highV - lowV) / 2 ** bits
      return { fsrV: highV - lowV, lsbV, inlV: inlLsb === undefined ? null : inlLsb * lsbV }
    }),
    plan: {
      target: inVolts(design.target.residual),
      points: `0 … ${2 ** bits - 1}`,
      plausible: 'of FSR',
      settle: engineering(design.measurement.settleLimitLsb * size.lsbV, 'V'),
      tolerance: design.decision ? inVolts(design.decision.tolerance) : null,
    },
    sums: {
      units: size.extents.units,
      gain: `${significant(gain.worstCasePpm, 3)} ppm / ${significant(gain.rssPpm, 3)} ppm`,
      offset: `${engineering(offset.worstCaseV, 'V')} / ${engineering(offset.rssV, 'V')}`,
    },
  }
}
