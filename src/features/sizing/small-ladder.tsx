import { type Ladder, octavesAbove } from '../../../shared/solver/sizing/ladder.ts'
import { ladderColours } from './ladder-rungs.tsx'
import { isAboveRails, ladderSentence } from './ladder-words.ts'

const octavePx = 3
const rails = 14

/** For lists: 3 px to the octave, one sentence for a screen reader. */
export function SmallLadder({ ladder }: { ladder: Ladder }) {
  const { rungs, bracket, stepV, reachV, shortBits, coarseBits, which } = ladder
  const own = rungs.filter(({ kind }) => kind !== 'missing')
  const ends = [
    stepV,
    ...own.map(({ outputV }) => outputV),
    bracket?.bottomV ?? stepV,
    bracket?.topV ?? stepV,
  ]
  const lowV = Math.min(...ends)
  const height = octavesAbove(Math.max(...ends), lowV) * octavePx + 6
  const y = (outputV: number) => height - 3 - octavesAbove(outputV, lowV) * octavePx
  const colour = ladderColours[which]
  const x = rails + 5
  return (
    <svg
      role="img"
      aria-label={ladderSentence(ladder)}
      width={24}
      height={Math.ceil(height)}
      className="inline-block"
    >
      <title>{ladderSentence(ladder)}</title>
      <path
        d={`M1 ${y(stepV)}V${y(own.at(-1)?.outputV ?? stepV)}M${rails - 1} ${y(stepV)}V${y(own.at(-1)?.outputV ?? stepV)}`}
        stroke={colour}
      />
      {own.map((rung) => (
        <line
          key={rung.bit}
          x1={0.5}
          x2={rails - 0.5}
          y1={y(rung.outputV)}
          y2={y(rung.outputV)}
          stroke={colour}
          strokeWidth={rung.kind === 'needed' && !isAboveRails(ladder, rung) ? 2 : 0.75}
        />
      ))}
      {bracket && (
        <g fill="none" stroke="var(--ink)">
          <path d={`M${x - 2} ${y(bracket.topV)}H${x}V${y(bracket.bottomV)}H${x - 2}`} strokeWidth={1.25} />
          {shortBits > 0 && (
            <path d={`M${x} ${y(bracket.topV)}V${y(reachV)}`} stroke="var(--bad)" strokeWidth={3} />
          )}
          {coarseBits > 0 && (
            <path d={`M${x} ${y(bracket.bottomV)}V${y(stepV)}`} stroke="var(--caution)" strokeWidth={3} />
          )}
        </g>
      )}
    </svg>
  )
}
