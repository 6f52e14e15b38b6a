import { postStation } from '../../../shared/contract/stations.ts'

/** The contract's own rule for a station's name, as one sentence; null when the name is good. */
export function nameTrouble(name: string): string | null {
  if (name === '') return 'Name is missing.'
  const checked = postStation.body?.safeParse({ name })
  return checked?.error?.issues[0]?.message ?? null
}
