import { useDeferredValue, useState } from 'react'
import type { Ladder } from '../../../shared/solver/sizing/ladder.ts'
import { PlotFigure } from '../../ui/plot/plot-figure.tsx'
import { PlotSvg } from '../../ui/plot/plot-svg.tsx'
import { LadderAxes } from './ladder-axes.tsx'
import { LadderColumn } from './ladder-column.tsx'
import { type LadderScale, ladderFrames } from './ladder-frame.ts'
import { LadderLegend } from './ladder-legend.tsx'
import { ladderSentence, ladderTable } from './ladder-words.ts'
import { SpokenTable } from './spoken-table.tsx'

export type TrimLadderProps = {
  /** Gain first; those that the design has. None: the axis alone. */
  ladders: readonly Ladder[]
  /** LSB and full-scale range; null while resolution or range are missing. */
  scale: LadderScale | null
  /** Why there is no ladder: "The two adjusters do the same thing here; they cannot be told apart." */
  problem?: string | undefined
}

const none: readonly Ladder[] = []

/** A scale to draw an axis by while there is none: its LSB and ppm are not shown. */
const anyScale: LadderScale = { lsbV: 1e-5, fsrV: 10 }

/** Each bit of the auxiliary DAC is a rung, the bracket what budget and target demand. */
export function TrimLadder({ ladders, scale, problem }: TrimLadderProps) {
  const [asTable, setAsTable] = useState(false)
  const shown = problem === undefined && scale !== null ? ladders : none
  const table = ladderTable(shown)
  // What is only spoken may follow a moment after the picture.
  const spoken = useDeferredValue(shown)
  const sentence = shown.length > 0 ? shown.map(ladderSentence).join(' ') : 'Trim ladder: the axis alone.'
  return (
    <PlotFigure
      title="Trim ladder"
      note="each rung one bit of the auxiliary DAC, as volts at the output"
      units={[['drawing', 'drawing']]}
      unit="drawing"
      onUnit={() => undefined}
      asTable={asTable}
      onTable={setAsTable}
      table={table}
      caption={<LadderLegend />}
    >
      {(width) => {
        const { frames, width: drawn, height } = ladderFrames(shown, scale ?? anyScale, width)
        return (
          <>
            {problem === undefined ? null : <p className="py-1 text-text">{problem}</p>}
            <PlotSvg width={drawn} height={height} label={sentence}>
              {frames.map((frame) => (
                <g key={frame.top}>
                  <LadderAxes frame={frame} hasScale={scale !== null} />
                  {frame.ladders.map(({ ladder, centre }) => (
                    <LadderColumn key={ladder.which} ladder={ladder} centre={centre} frame={frame} />
                  ))}
                </g>
              ))}
            </PlotSvg>
            {shown.length > 0 && (
              <div className="sr-only">
                <SpokenTable ladders={spoken} />
              </div>
            )}
          </>
        )
      }}
    </PlotFigure>
  )
}
