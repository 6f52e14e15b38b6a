import { useSyncExternalStore } from 'react'
import type { ErrorCode, FieldError } from '../../../shared/errors.ts'
import { readStored, writeStored } from '../../lib/storage.ts'
import type { TrimBody } from './trim-body.ts'

/**
 * Records on their way to the server. One is kept here before it is first sent and taken out only on a definite
 * answer, always with the same idempotency key: a lost answer, a killed tab or a lost network doubles nothing.
 */
export type Waiting = {
  key: string
  body: TrimBody
  savedAt: string
  /** Records name who measured: it is sent only while that person is signed in. */
  person: string
  /** The draft that it came from, which learns how it ended. */
  draft: string
  /** Follows the trim in the same breath; its own key is made once, with the trim's. */
  override: { key: string; reason: string } | null
  /** The trim that is recorded already, when only its override still waits. */
  done: RecordedTrim | null
  refused: { code: ErrorCode; message: string; errors: readonly FieldError[] } | null
}

export type RecordedTrim = {
  id: string
  number: number
  recordedAt: string
  accepted: boolean
  kind: 'trim' | 'verify'
}

const name = 'bench.outbox'
const listeners = new Set<() => void>()
let seen: { text: string; items: readonly Waiting[] } = { text: '[]', items: [] }

/** Everything waiting, read anew: another tab may have sent it. */
export function readOutbox(): readonly Waiting[] {
  const stored = readStored(name)
  const items = Array.isArray(stored) ? stored.filter(isWaiting) : []
  const text = JSON.stringify(items)
  if (text !== seen.text) seen = { text, items }
  return seen.items
}

function isWaiting(value: unknown): value is Waiting {
  const one = value as Partial<Waiting> | null
  return (
    typeof one === 'object' && one !== null && typeof one.key === 'string' && typeof one.body === 'object'
  )
}

/** False when this computer keeps nothing: then a record that cannot be sent is not said to be saved. */
function write(items: readonly Waiting[]): boolean {
  const kept = writeStored(name, items.length === 0 ? null : items)
  for (const listener of listeners) listener()
  return kept
}

export function putInOutbox(item: Waiting): boolean {
  return write([...readOutbox().filter((other) => other.key !== item.key), item])
}

export function takeFromOutbox(key: string): void {
  write(readOutbox().filter((item) => item.key !== key))
}

/** In one write: there is no moment at which neither the old nor the new one is kept. */
export function replaceInOutbox(key: string, item: Waiting): void {
  write(readOutbox().map((other) => (other.key === key ? item : other)))
}

function subscribe(listener: () => void): () => void {
  listeners.add(listener)
  window.addEventListener('storage', listener)
  return () => {
    listeners.delete(listener)
    window.removeEventListener('storage', listener)
  }
}

export function useOutbox(): readonly Waiting[] {
  return useSyncExternalStore(subscribe, readOutbox)
}
