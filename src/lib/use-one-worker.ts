import { useEffect, useRef } from 'react'

/** What of a Worker is used; tests hand in one of their own. */
export type OwnWorker<To, From> = {
  postMessage: (message: To) => void
  terminate: () => void
  onmessage: ((event: MessageEvent<From>) => void) | null
  onerror: ((event: ErrorEvent) => void) | null
}
export type StartWorker<To, From> = () => OwnWorker<To, From> | Promise<OwnWorker<To, From>>

type Listener<From> = {
  hear: (message: From) => void
  fail: (why: 'broke-off' | 'did-not-start') => void
}

/**
 * One task at a time, in a worker of its own that ends with it, with the next start, or when the page is left. Every message
 * but `progress` is the last.
 */
export function useOneWorker<To, From extends { kind: string }>(startWorker: StartWorker<To, From>) {
  const running = useRef<OwnWorker<To, From> | null>(null)
  // Counts the starts and ends: what an earlier one still says is no longer heard.
  const turn = useRef(0)
  const end = () => {
    turn.current += 1
    running.current?.terminate()
    running.current = null
  }
  // biome-ignore lint/correctness/useExhaustiveDependencies: it only touches refs
  useEffect(() => end, [])
  const start = async (asked: To, { hear, fail }: Listener<From>) => {
    end()
    const own = turn.current
    try {
      const worker = await startWorker()
      if (own !== turn.current) {
        worker.terminate()
        return
      }
      running.current = worker
      worker.onmessage = ({ data }) => {
        if (own !== turn.current) return
        if (data.kind !== 'progress') end()
        hear(data)
      }
      worker.onerror = () => {
        if (own !== turn.current) return
        end()
        fail('broke-off')
      }
      worker.postMessage(asked)
    } catch {
      if (own === turn.current) fail('did-not-start')
    }
  }
  /** False when there is no worker yet, or no longer, to hear it. */
  const tell = (message: To): boolean => {
    running.current?.postMessage(message)
    return running.current !== null
  }
  return { start, tell, end }
}
