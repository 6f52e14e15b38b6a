import { bitsWord, volts } from '../../../shared/design-words/words.ts'
import type { AdjusterSize } from '../../../shared/solver/sizing/types.ts'
import type { Which } from '../../../shared/solver/types.ts'

/** A number as it stands in a sentence, and where it comes from. */
export type NumberInText = { text: string; label: string; path: string }

/** The numbers of the verdict sentences in the order in which the sentences say them. */
export function verdictNumbers(which: Which, size: AdjusterSize): NumberInText[] {
  const at = (path: string) => `/adjusters/${which}/${path}`
  return [
    {
      text: volts(size.availableReachOutputV),
      label: `reach of ${which} at the output`,
      path: at('availableReachOutputV'),
    },
    {
      text: volts(size.requiredReachOutputV),
      label: `needed reach of ${which} at the output`,
      path: at('requiredReachOutputV'),
    },
    {
      text: volts(size.available.outputStepV),
      label: `step of ${which} at the output`,
      path: at('available/outputStepV'),
    },
    {
      text: volts(size.requiredStepV * size.outputPerV),
      label: `allowed step of ${which}`,
      path: at('requiredStepV'),
    },
    { text: bitsWord(size.available.bits), label: `bits of ${which}`, path: at('available/bits') },
    { text: neededText(size), label: `bits that ${which} needs`, path: at('requiredBits') },
  ]
}

/** As the bits sentence says it: "10 would do", or how tall the demand is. */
function neededText({ verdict, requiredBits }: AdjusterSize): string {
  return verdict === 'covers' ? `${requiredBits} would do` : bitsWord(requiredBits)
}
