import type { YieldResult } from '../../../shared/solver/yield/types.ts'
import { PlotFigure } from '../../ui/plot/plot-figure.tsx'
import { numberText } from '../../ui/plot/plot-numbers.ts'
import { YieldHistogram } from './yield-histogram.tsx'
import { histogramTable, passWord } from './yield-words.ts'

/** Largest true error left after the last pass, against the tolerance. */
export function YieldPlot({ result }: { result: YieldResult }) {
  const { histogram, units } = result.remainingLsb
  const width = Number(histogram.width.toPrecision(3))
  const end = Number((histogram.from + histogram.width * histogram.counts.length).toPrecision(3))
  const over = histogram.over > 0 ? `${numberText(histogram.over, 0)} over ${end} LSB. ` : ''
  const lost = result.trials - units
  return (
    <PlotFigure
      title="Largest remaining error"
      units={[['LSB', 'LSB']]}
      unit="LSB"
      onUnit={() => undefined}
      table={histogramTable(histogram)}
      caption={`${numberText(result.trials, 0)} simulated units, ${passWord(result.passes.length)}, seed ${result.seed}. Each bar ${width} LSB. Judged at the codes of the plan and both ends. ${over}No error bars: counts.${lost > 0 ? ` ${numberText(lost, 0)} out of reach are not drawn.` : ''}`}
    >
      {(room) => <YieldHistogram result={result} width={Math.min(room, 440)} />}
    </PlotFigure>
  )
}
