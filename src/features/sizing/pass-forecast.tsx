import type { SizeResult, SizingDesign } from '../../../shared/solver/sizing/types.ts'
import { Explain } from './explain.tsx'

type PassForecastProps = {
  design: SizingDesign
  result: SizeResult
  onField?: ((path: string) => void) | undefined
}

/** How many trims until the target is met in the worst case. */
export function PassForecast({ design, result, onField }: PassForecastProps) {
  const known = [
    ...new Set(Object.values(result.adjusters).flatMap((size) => (size ? [size.effectTolerance] : []))),
  ]
  const within = known.map((tolerance) => `±${Number((tolerance * 100).toPrecision(3))} %`).join(' and ')
  const passes = (name: 'withNominalEffect' | 'withMeasuredEffect', label: string) => (
    <Explain
      design={design}
      result={result}
      of={[{ label, path: `/passes/${name}` }]}
      name={label}
      onField={onField}
      className="-mx-2 -my-1 px-1 font-semibold"
    >
      {result.passes[name] ?? 'not within 9'}
    </Explain>
  )
  return (
    <p className="text-body">
      Passes to the target, worst case: {passes('withNominalEffect', 'passes with the effect as stated')} with
      the effect as stated ({within}), {passes('withMeasuredEffect', 'passes with the effect measured')} with
      the effect taken again from pass 1.
    </p>
  )
}
