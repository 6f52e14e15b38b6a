import { undecidedStandings } from '../../../shared/contract/lot-standing.ts'
import type { LotUnit } from '../../../shared/contract/lots.ts'
import { Verdict } from '../../ui/verdict.tsx'
import { standingLook } from './words.ts'

export const isUndecided = ({ reference, standing, places }: LotUnit): boolean =>
  !reference && places.length > 0 && undecidedStandings.includes(standing)

export function StandingWord({ standing }: { standing: LotUnit['standing'] }) {
  const { verdict, word } = standingLook[standing]
  return verdict === null ? (
    <span className="font-semibold">{word}</span>
  ) : (
    <Verdict verdict={verdict} word={word} />
  )
}
