import { useQueryClient } from '@tanstack/react-query'
import { useEffect, useRef, useState } from 'react'
import type { BatchOutcome } from '../../../../shared/contract/batches.ts'
import { errorTable, isOgeeError } from '../../../../shared/errors.ts'
import { setConnection } from '../../../lib/connection.ts'
import type { Ready, UploadPlan } from './plan.ts'
import type { RowReport } from './report.ts'
import { blockLines, sendBlock } from './send-block.ts'

export type Upload = {
  plan: UploadPlan | null
  state: 'idle' | 'ready' | 'sending' | 'stopped' | 'done'
  done: number
  recorded: number
  replayed: number
  /** Measurements that are not recorded, or recorded and not good, in order of the file. */
  reports: readonly RowReport[]
  trouble: unknown
  startedAt: number
  endedAt: number
}

const nothing: Upload = {
  plan: null,
  state: 'idle',
  done: 0,
  recorded: 0,
  replayed: 0,
  reports: [],
  trouble: null,
  startedAt: 0,
  endedAt: 0,
}
const tries = 6

/**
 * Sends a planned file in blocks, one after another. A block whose answer was cut is sent again: keys are made from the
 * measurements, so that nothing is recorded twice. Leaving the page stops it after the block under way.
 */
export function useUpload() {
  const client = useQueryClient()
  const [upload, setUpload] = useState<Upload>(nothing)
  const abort = useRef<AbortController | null>(null)
  useEffect(() => () => abort.current?.abort(), [])

  const send = async (plan: UploadPlan, from: Upload) => {
    const controller = new AbortController()
    abort.current = controller
    let now: Upload = {
      ...from,
      plan,
      state: 'sending',
      trouble: null,
      startedAt: from.startedAt || Date.now(),
    }
    const show = (change: Partial<Upload>) => {
      now = { ...now, ...change }
      if (!controller.signal.aborted) setUpload(now)
    }
    show({})
    try {
      while (now.done < plan.ready.length) {
        const block = plan.ready.slice(now.done, now.done + blockLines)
        const outcomes = await sendPatiently(block, controller.signal)
        show(withOutcomes(now, block, outcomes))
        void client.invalidateQueries({ queryKey: ['lots', 'one'] })
      }
      show({ state: 'done', endedAt: Date.now() })
    } catch (error) {
      if (isOgeeError(error, 'sign-in-required')) setConnection({ sessionEnded: true })
      show({ state: 'stopped', trouble: error })
    } finally {
      void client.invalidateQueries({ queryKey: ['lots'] })
    }
  }

  return {
    upload,
    take: (plan: UploadPlan) =>
      setUpload({ ...nothing, plan, state: 'ready', reports: problemReports(plan) }),
    start: () => (upload.plan ? void send(upload.plan, upload) : undefined),
    stop: () => {
      abort.current?.abort()
      setUpload((last) => ({ ...last, state: 'stopped' }))
    },
    clear: () => setUpload(nothing),
  }
}

/** Again, later each time, where that can help. */
async function sendPatiently(block: readonly Ready[], signal: AbortSignal): Promise<BatchOutcome[]> {
  for (let attempt = 1; ; attempt++) {
    try {
      return await sendBlock(block, signal)
    } catch (error) {
      const mayHelp = isOgeeError(error) && errorTable[error.code].retry
      if (signal.aborted || !mayHelp || attempt >= tries) throw error
      const said = error.facts.retryAfterSeconds
      const waitMs = typeof said === 'number' ? said * 1_000 : 250 * 2 ** (attempt - 1)
      await new Promise((resolve) => setTimeout(resolve, waitMs))
    }
  }
}

const problemReports = ({ problems }: UploadPlan): RowReport[] =>
  problems.map(({ line, unit, channel, range, message }) => ({
    firstLine: line,
    lastLine: line,
    unit: unit ?? '',
    channel: channel ?? '',
    range: range ?? '',
    verdict: null,
    message,
  }))

function withOutcomes(
  now: Upload,
  block: readonly Ready[],
  outcomes: readonly BatchOutcome[],
): Partial<Upload> {
  const reports = [...now.reports]
  let { recorded, replayed } = now
  outcomes.forEach((outcome) => {
    const ready = block[outcome.line - 1]
    if (!ready) return
    const { unit, channel, range, firstLine, lastLine } = ready
    const at = { unit, channel, range, firstLine, lastLine }
    if ('record' in outcome) {
      recorded += 1
      if (outcome.record.notices.some(({ code }) => code === 'replayed')) replayed += 1
      const { verdict, accepted } = outcome.record
      if (!accepted && verdict !== null) reports.push({ ...at, verdict, message: 'Recorded.' })
    } else reports.push({ ...at, verdict: null, message: outcome.problem.detail })
  })
  reports.sort((a, b) => a.firstLine - b.firstLine)
  return { reports, recorded, replayed, done: now.done + block.length }
}
