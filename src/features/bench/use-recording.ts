import { useQueryClient } from '@tanstack/react-query'
import { useState } from 'react'
import { v4 as newKey } from 'uuid'
import type { OgeeError } from '../../../shared/errors.ts'
import type { DraftFields } from './draft.ts'
import type { Row } from './grid-state.ts'
import { type RecordedTrim, takeFromOutbox, useOutbox, type Waiting } from './outbox.ts'
import { recordOrKeep, type Sent } from './send-outbox.ts'
import type { TrimBody } from './trim-body.ts'
import { useOutboxSender } from './use-outbox-sender.ts'

type SetField = <K extends keyof DraftFields>(field: K, value: DraftFields[K]) => void

type Recording = {
  draftName: string
  person: string
  fields: DraftFields
  setField: SetField
  rows: readonly Row[]
}

/** What the server did not take, with the rows that it was about: another keystroke and it no longer holds. */
type Refusal = { error: OgeeError; rows: readonly Row[] }

/** Records the measurement on the page, keeps it here while the server is away, and learns how it ended. */
export function useRecording({ draftName, person, fields, setField, rows }: Recording) {
  const client = useQueryClient()
  const [isBusy, setBusy] = useState(false)
  const [refusal, setRefusal] = useState<Refusal | null>(null)
  const [overrideTrouble, setOverrideTrouble] = useState<string | null>(null)
  const waiting = useOutbox().find((item) => item.draft === draftName && item.refused === null) ?? null

  const finish = (item: Waiting, sent: Sent) => {
    if (sent.is === 'recorded') {
      if (item.draft === draftName) {
        setField('status', { is: 'recorded', ...sent.trim })
        setOverrideTrouble(sent.overrideRefused?.message ?? null)
      }
      void client.invalidateQueries({
        predicate: ({ queryKey }) => queryKey[0] !== 'me' && queryKey[0] !== 'revision',
      })
    }
    if (sent.is === 'refused' && item.draft === draftName) {
      takeFromOutbox(item.key)
      setRefusal({ error: sent.error, rows })
    }
  }
  useOutboxSender(person, finish)

  const record = async (body: TrimBody, reason: string | null) => {
    if (isBusy || waiting || fields.status.is === 'recorded') return
    setBusy(true)
    setRefusal(null)
    // One key for one filled form: the same again after a lost answer, another for another body.
    const text = JSON.stringify({ body, reason })
    const attempt = fields.attempt?.body === text ? fields.attempt : { body: text, key: newKey() }
    setField('attempt', attempt)
    const item: Waiting = {
      key: attempt.key,
      body,
      savedAt: new Date().toISOString(),
      person,
      draft: draftName,
      override: reason === null ? null : { key: `${attempt.key}-override`, reason },
      done: null,
      refused: null,
    }
    try {
      finish(item, await recordOrKeep(item))
    } finally {
      setBusy(false)
    }
  }
  const holds = refusal !== null && refusal.rows === rows
  return {
    record,
    isBusy,
    waiting,
    refusal: holds ? refusal.error : null,
    overrideTrouble,
    recorded: fields.status.is === 'recorded' ? (fields.status as RecordedTrim & { is: 'recorded' }) : null,
    /** Another field was changed: what the server said of it no longer holds. */
    forgetRefusal: () => setRefusal(null),
  }
}

const fieldOfCode: Readonly<Partial<{ [code: string]: string }>> = {
  'lot-unknown': '/lot',
  'applied-required': '/applied',
  'applied-unknown': '/applied',
  'unit-serial': '/unit',
  'reason-required': '/reason',
  'instrument-unknown': '/conditions/instrument',
  'instrument-retired': '/conditions/instrument',
  'instrument-overdue': '/conditions/instrument',
}

/** The sentence of a refusal for one field of the form; its own pointer first, else what its code is about. */
export function refusedAt(error: OgeeError | null, path: string): string | null {
  if (!error) return null
  const own = error.errors.find((place) => place.path === path || place.path.startsWith(`${path}/`))
  if (own) return own.message
  return error.errors.length === 0 && fieldOfCode[error.code] === path ? error.message : null
}

const shownAtFields = [
  '/points',
  '/lot',
  '/applied',
  '/unit',
  '/reason',
  '/conditions/temperatureC',
  '/conditions/instrument',
]

/** True when every place of a refusal is shown at a field; otherwise it is shown whole as well. */
export function isPlaced(error: OgeeError): boolean {
  if (error.errors.length === 0) return fieldOfCode[error.code] !== undefined
  return error.errors.every(({ path }) =>
    shownAtFields.some((field) => path === field || path.startsWith(`${field}/`)),
  )
}
