import { useEffect, useMemo, useState } from 'react'
import type { SizeResult } from '../../../shared/solver/sizing/types.ts'
import type { Adjuster, PerAdjuster, Which } from '../../../shared/solver/types.ts'
import { findNetwork } from '../../lib/find-network.ts'
import type { FromNetworkWorker, ToNetworkWorker } from '../../lib/network-messages.ts'
import { type ResistorAnswer, type ResistorSettings, resistorQuestion } from './resistor-request.ts'

/** What of a Worker the search uses; tests hand in one of their own. */
export type NetworkWorker = {
  postMessage: (question: ToNetworkWorker) => void
  terminate: () => void
  onmessage: ((event: MessageEvent<FromNetworkWorker>) => void) | null
}
export type StartNetworkWorker = () => NetworkWorker | Promise<NetworkWorker>

const startBuilt: StartNetworkWorker = async () => {
  const { startNetworkWorker } = await import('../../lib/worker.ts')
  return startNetworkWorker()
}

/** Typing rests so long before a worker is started. */
const restMs = 150

/**
 * Resistors for an adjuster: two at once, in the page; three in a worker once typing rests, with the last answer until
 * then. Null before the first answer, and without the adjuster.
 */
export function useResistors(
  design: { adjusters: PerAdjuster<Adjuster> },
  size: SizeResult,
  which: Which,
  settings: ResistorSettings,
  startWorker: StartNetworkWorker = startBuilt,
): ResistorAnswer | null {
  const question = useMemo(
    () => resistorQuestion(design, size, which, settings),
    [design, size, which, settings],
  )
  const isSlow = design.adjusters[which]?.network.kind === 'shifted'
  const quick = useMemo(() => (question && !isSlow ? findNetwork(question) : null), [question, isSlow])
  const [slow, setSlow] = useState<ResistorAnswer | null>(null)
  useEffect(() => {
    if (!question || !isSlow) return
    let worker: NetworkWorker | null = null
    let isOver = false
    const ask = async () => {
      worker = await startWorker()
      if (isOver) {
        worker.terminate()
        return
      }
      worker.onmessage = ({ data }) => {
        worker?.terminate()
        setSlow(data)
      }
      worker.postMessage(question)
    }
    const timer = setTimeout(() => void ask(), restMs)
    return () => {
      isOver = true
      clearTimeout(timer)
      worker?.terminate()
    }
  }, [question, isSlow, startWorker])
  if (question === null) return null
  return isSlow ? slow : quick
}
