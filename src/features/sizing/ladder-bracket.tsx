import { bitsAmount, volts } from '../../../shared/design-words/words.ts'
import type { Ladder } from '../../../shared/solver/sizing/ladder.ts'
import { PlotText } from '../../ui/plot/axes.tsx'
import { type EndLabel, EndLabels } from '../../ui/plot/end-labels.tsx'
import { bracketGap, halfRails, type LadderFrame } from './ladder-frame.ts'
import { ladderColours } from './ladder-rungs.tsx'
import { isShort } from './ladder-words.ts'

/** Said by the ladder's own sentences. */
const silent = { 'aria-hidden': true }
const serif = 9
const labelGap = 8
const line = 13

type Placed = { ladder: Ladder; centre: number; frame: LadderFrame }

/** What budget (top) and target (bottom) demand; where it sticks out it is heavy and in the verdict's colour. */
export function Bracket({ ladder, centre, frame }: Placed) {
  const { bracket, coarseBits, reachV, stepV } = ladder
  const x = centre + halfRails + bracketGap
  if (bracket === null) return null
  const top = frame.y(bracket.topV)
  const bottom = frame.y(bracket.bottomV)
  const reach = reachV > 0 ? Math.min(frame.y(reachV), bottom) : bottom
  const step = Math.max(frame.y(stepV), top)
  return (
    <g fill="none" data-bracket="">
      <path d={`M${x - serif} ${top}H${x}V${bottom}H${x - serif}`} stroke="var(--ink)" strokeWidth={1.75} />
      {isShort(ladder) && (
        <path
          data-sticks-out="above"
          d={`M${x - serif} ${top}H${x}V${reach}`}
          stroke="var(--bad)"
          strokeWidth={4}
        />
      )}
      {coarseBits > 0 && (
        <path
          data-sticks-out="below"
          d={`M${x - serif} ${bottom}H${x}V${step}`}
          stroke="var(--caution)"
          strokeWidth={4}
        />
      )}
    </g>
  )
}

/** Direct labels: demand and margins beside the bracket, reach and step at the rails' ends. */
export function LadderLabels({ ladder, centre, frame }: Placed) {
  const colour = ladderColours[ladder.which]
  const { rungs, reachV, stepV, coarseBits } = ladder
  const highest = Math.max(reachV, ...rungs.map(({ outputV }) => outputV))
  return (
    <g {...silent}>
      {!isShort(ladder) && (
        <PlotText x={centre} y={frame.y(highest) - 8} anchor="middle" colour={colour}>
          {`reach ${volts(reachV)}`}
        </PlotText>
      )}
      {coarseBits === 0 && (
        <PlotText x={centre} y={frame.y(stepV) + 17} anchor="middle" colour={colour}>
          {`step ${volts(stepV)}`}
        </PlotText>
      )}
      <EndLabels x={centre + halfRails + bracketGap + labelGap} labels={bracketLabels(ladder, frame)} />
    </g>
  )
}

function bracketLabels(ladder: Ladder, { y }: LadderFrame): EndLabel[] {
  const { which, bracket, reachV, stepV, shortBits, coarseBits, spareAboveBits, spareBelowBits } = ladder
  const own = ladderColours[which]
  if (bracket === null) {
    return [{ y: y(reachV > 0 ? reachV : stepV), text: 'nothing is asked', colour: 'var(--ink-2)' }]
  }
  const top = y(bracket.topV)
  const bottom = y(bracket.bottomV)
  const ends: EndLabel[] = [
    { y: top, text: `needs ${volts(bracket.topV)}`, colour: 'var(--ink)', weight: 600 },
    { y: bottom, text: `allows ${volts(bracket.bottomV)}`, colour: 'var(--ink)', weight: 600 },
  ]
  if (isShort(ladder)) {
    const text = shortBits > 0 ? `short ${bitsAmount(shortBits)}` : 'short, no reach'
    ends.push({ y: top - line, text, colour: 'var(--bad)', weight: 600 })
    ends.push({ y: reachV > 0 ? y(reachV) : bottom - line, text: `reach ${volts(reachV)}`, colour: own })
  } else {
    ends.push({ y: top - line, text: `${bitsAmount(spareAboveBits)} spare`, colour: 'var(--ink-2)' })
  }
  if (coarseBits > 0) {
    ends.push({
      y: bottom + line,
      text: `coarse by ${bitsAmount(coarseBits)}`,
      colour: 'var(--caution)',
      weight: 600,
    })
    ends.push({ y: y(stepV), text: `step ${volts(stepV)}`, colour: own })
  } else {
    ends.push({ y: bottom + line, text: `${bitsAmount(spareBelowBits)} spare`, colour: 'var(--ink-2)' })
  }
  return ends
}
