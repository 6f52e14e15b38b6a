import { useSyncExternalStore } from 'react'

/** What the last answers said about the way to the server. The frame shows it; requests write it. */
export type Connection = {
  /** The cookie no longer stands for anybody. */
  sessionEnded: boolean
  /** The sentence of the outage, or null while the server answers. */
  outage: string | null
}

let state: Connection = { sessionEnded: false, outage: null }
const listeners = new Set<() => void>()

export function connection(): Connection {
  return state
}

export function setConnection(change: Partial<Connection>): void {
  const next = { ...state, ...change }
  if (next.sessionEnded === state.sessionEnded && next.outage === state.outage) return
  state = next
  for (const listener of listeners) listener()
}

function subscribe(listener: () => void): () => void {
  listeners.add(listener)
  return () => listeners.delete(listener)
}

export function useConnection(): Connection {
  return useSyncExternalStore(subscribe, connection)
}
