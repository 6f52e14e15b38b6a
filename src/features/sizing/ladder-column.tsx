import type { Ladder } from '../../../shared/solver/sizing/ladder.ts'
import { upward, useWalk } from '../../ui/plot/walk-points.ts'
import { Bracket, LadderLabels } from './ladder-bracket.tsx'
import { halfRails, type LadderFrame } from './ladder-frame.ts'
import { ladderColours, Rails, RungMark } from './ladder-rungs.tsx'
import { ladderSentence, reachSentence, rungSentence } from './ladder-words.ts'

/** One adjuster: its rungs from the lowest up are walked by the arrow keys, and above them stands the reach. */
export function LadderColumn(props: { ladder: Ladder; centre: number; frame: LadderFrame }) {
  const { ladder, centre, frame } = props
  const rungs = [...ladder.rungs].sort((a, b) => a.bit - b.bit)
  const stop = useWalk(rungs.length + 1, upward)
  const head = frame.y(ladder.reachV > 0 ? ladder.reachV : ladder.stepV)
  const spoken = { role: 'group', 'aria-label': ladderSentence(ladder) }
  return (
    <g {...spoken} data-walk="" data-ladder={ladder.which}>
      <text
        x={centre - halfRails - 28}
        y={frame.top - 26}
        dy="0.35em"
        fontSize={13}
        fontWeight={600}
        fontFamily="Fira Sans, sans-serif"
        fill={ladderColours[ladder.which]}
      >
        {ladder.which}
      </text>
      <Rails {...props} />
      {rungs.map((rung, i) => (
        <g key={rung.bit} {...stop(i)} aria-label={rungSentence(ladder, rung)}>
          <RungMark ladder={ladder} rung={rung} centre={centre} y={frame.y(rung.outputV)} />
        </g>
      ))}
      <g {...stop(rungs.length)} aria-label={reachSentence(ladder)}>
        <rect x={centre - 40} y={head - 28} width={80} height={24} fill="transparent" />
      </g>
      <Bracket {...props} />
      <LadderLabels {...props} />
    </g>
  )
}
