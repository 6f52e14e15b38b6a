import { type ChangeEvent, type DragEvent, useEffect, useRef, useState } from 'react'
import type { Design } from '../../../../shared/contract/design.ts'
import type { LotDetail } from '../../../../shared/contract/lots.ts'
import { Button } from '../../../ui/button.tsx'
import { Problem } from '../../../ui/problem.tsx'
import { Section } from '../../../ui/section.tsx'
import { Segmented } from '../../../ui/segmented.tsx'
import { planUpload, type UploadKind } from './plan.ts'
import { ReportTable } from './report-table.tsx'
import { type Upload, useUpload } from './use-upload.ts'

type Props = { lot: LotDetail; design: Design; onClose: () => void }

/** A points CSV goes in block by block; what cannot go in is named, kept, and can be repaired. */
export default function UploadPanel({ lot, design, onClose }: Props) {
  const [kind, setKind] = useState<UploadKind>('trim')
  const [trouble, setTrouble] = useState<unknown>(null)
  const { upload, take, start, stop, clear } = useUpload()
  const isSending = upload.state === 'sending'
  useWarnBeforeLeaving(isSending)
  /** A file is planned for a while: what has been overtaken by another file, kind or sending is not taken. */
  const turn = useRef(0)
  const send = () => {
    turn.current += 1
    start()
  }
  const read = async (file: File | undefined) => {
    if (!file || isSending) return
    setTrouble(null)
    turn.current += 1
    const mine = turn.current
    try {
      const plan = await planUpload(file, { design, key: lot.design, lot: lot.key, kind })
      if (turn.current === mine) take(plan)
    } catch (error) {
      if (turn.current !== mine) return
      clear()
      setTrouble(error)
    }
  }
  const onDrop = (event: DragEvent) => {
    event.preventDefault()
    void read(event.dataTransfer.files[0])
  }
  const onFile = ({ target }: ChangeEvent<HTMLInputElement>) => {
    const [file] = target.files ?? []
    void read(file).finally(() => {
      target.value = ''
    })
  }
  return (
    <Section
      title="Add units"
      className="my-3 print:hidden"
      side={
        <Button look="quiet" disabled={isSending} onClick={onClose}>
          Close
        </Button>
      }
    >
      {/* biome-ignore lint/a11y/noStaticElementInteractions: dropping is a second way; the file field is the first */}
      <div
        onDragOver={(event) => event.preventDefault()}
        onDrop={onDrop}
        className="flex flex-wrap items-center gap-x-4 gap-y-2 border border-rule border-dashed p-3"
      >
        <Segmented
          label="Measured"
          segments={[
            { value: 'trim', label: 'as found' },
            { value: 'verify', label: 'as left' },
          ]}
          value={kind}
          onChange={(value) => {
            // What is under way stays what it was planned for.
            if (isSending) return
            setKind(value)
            // A plan says what it is for.
            turn.current += 1
            clear()
          }}
        />
        <label className="inline-flex min-h-7 flex-wrap items-center gap-2">
          Points CSV
          <input
            type="file"
            accept=".csv,text/csv,text/plain"
            disabled={isSending}
            onChange={onFile}
            data-upload
            className="max-w-full min-h-7 file:mr-2 file:min-h-7 file:rounded-sm file:border file:border-rule file:px-3 file:font-semibold"
          />
        </label>
        <span className="text-small text-ink-3">
          or drop it here, or run:{' '}
          <code className="font-mono">{`ogee batch --lot ${lot.key} points.csv`}</code>
        </span>
      </div>
      <div className="mt-2 space-y-2">
        <Problem error={trouble} />
        <Progress upload={upload} onStart={send} onStop={stop} />
        <ReportTable upload={upload} />
      </div>
    </Section>
  )
}

function useWarnBeforeLeaving(isSending: boolean): void {
  useEffect(() => {
    if (!isSending) return
    const warn = (event: BeforeUnloadEvent) => event.preventDefault()
    window.addEventListener('beforeunload', warn)
    return () => window.removeEventListener('beforeunload', warn)
  }, [isSending])
}

type ProgressProps = { upload: Upload; onStart: () => void; onStop: () => void }

function Progress({ upload, onStart, onStop }: ProgressProps) {
  const { plan, state, done } = upload
  if (!plan) return null
  const all = plan.ready.length
  return (
    <div className="space-y-2">
      <p role="status">{sentenceOf(upload)}</p>
      {state === 'sending' || state === 'stopped' ? (
        <progress
          className="block h-2 w-full accent-ink"
          value={done}
          max={Math.max(1, all)}
          aria-label="Sent"
        />
      ) : null}
      {state === 'stopped' ? <Problem error={upload.trouble} /> : null}
      <div className="flex gap-3">
        {state === 'ready' && all > 0 ? (
          <Button look="primary" onClick={onStart}>
            {`Record ${all} ${all === 1 ? 'measurement' : 'measurements'}`}
          </Button>
        ) : null}
        {state === 'sending' ? <Button onClick={onStop}>Stop</Button> : null}
        {state === 'stopped' && done < all ? (
          <Button look="primary" onClick={onStart}>
            Go on
          </Button>
        ) : null}
      </div>
    </div>
  )
}

function sentenceOf({ plan, state, done, recorded, replayed, startedAt, endedAt }: Upload): string {
  if (!plan) return ''
  const all = plan.ready.length
  const left = plan.problems.length
  const bad =
    left === 0
      ? ''
      : ` ${left} ${left === 1 ? 'place' : 'places'} in the file cannot be taken; the rest goes on.`
  const before = replayed === 0 ? '' : ` ${replayed} of them had been recorded before; nothing is doubled.`
  switch (state) {
    case 'ready':
      return `${plan.name}: ${all} ${all === 1 ? 'measurement' : 'measurements'} can be recorded.${bad}`
    case 'sending':
      return `${done} of ${all} measurements.${bad}`
    case 'stopped':
      return `Stopped at ${done} of ${all} measurements. Nothing is lost: going on doubles nothing.`
    default: {
      const seconds = Math.max(0.1, (endedAt - startedAt) / 1_000).toFixed(1)
      return `Upload complete in ${seconds} s: ${recorded} of ${all} measurements recorded.${before}${bad}`
    }
  }
}
