import { readStored, writeStored } from '../../lib/storage.ts'

/** What this browser keeps of a ledger: a server that is rewritten later contradicts it. */
export type Kept = { key: string; note: string; since: string }

const name = 'ledger-kept'

export function readKept(): Kept | null {
  const stored = readStored(name) as Partial<Kept> | null
  const { key, note, since } = stored ?? {}
  return typeof key === 'string' && typeof note === 'string' && typeof since === 'string'
    ? { key, note, since }
    : null
}

/** Keeps the key and the checkpoint that are shown, from now on. */
export function keep(key: string, note: string, now: Date): Kept {
  const kept = { key: key.trim(), note, since: now.toISOString() }
  writeStored(name, kept)
  return kept
}

export function forget(): void {
  writeStored(name, null)
}
