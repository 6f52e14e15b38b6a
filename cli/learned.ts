import type { Design } from '../shared/contract/design.ts'
import type { Record as StoredRecord } from '../shared/contract/record.ts'
import { getTrim } from '../shared/contract/trims.ts'
import { canonicalText, type Json } from '../shared/ledger/canonical.ts'
import { appliedVoltages } from '../shared/solver/applied.ts'
import type { PreviousPass } from '../shared/solver/learn.ts'
import { prepareTrim } from '../shared/solver/prepare-trim.ts'
import type { Applied } from '../shared/solver/types.ts'
import type { Client } from './client.ts'
import { previousFrom } from './previous.ts'

const mostBefore = 8

/**
 * What effects are learned from, by the server's rule: the measurement that is followed; a verification measured with the
 * same codes shows no move, so the one that it stands on teaches.
 */
export async function learnedFrom(
  client: Pick<Client, 'call'>,
  before: StoredRecord,
  applied: Applied,
  { design, range }: { design: Design; range: string },
): Promise<PreviousPass> {
  let teacher = before
  for (let step = 0; step < mostBefore; step++) {
    if (teacher.kind !== 'verify' || teacher.follows === null || !isSame(teacher.applied, applied)) break
    const earlier = await client.call(getTrim, { params: { id: teacher.follows } })
    if (earlier.notices.some(({ code }) => code === 'withdrawn')) break
    teacher = earlier
  }
  const { result } = teacher
  if (result?.format !== 'ogee.verify/1' || result.fit === null) {
    return previousFrom(teacher, `Record ${teacher.number}`)
  }
  const { gain, offset } = appliedVoltages(prepareTrim(design, range).trimmers, teacher.applied ?? 'neutral')
  return { fit: result.fit, trim: { appliedNodeV: { gain, offset } } }
}

const isSame = (a: Json | StoredRecord['applied'], b: Applied) =>
  canonicalText(a as Json) === canonicalText(b as Json)
