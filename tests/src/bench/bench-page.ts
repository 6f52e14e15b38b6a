import { act, fireEvent, screen, within } from '@testing-library/react'
import type { RecordRequest } from '../../../shared/contract/record.ts'
import { computeCodes } from '../../../shared/solver/codes.ts'
import type { PreviousPass } from '../../../shared/solver/learn.ts'
import { verifyPoints } from '../../../shared/solver/verify.ts'
import { loadPaste } from '../../../src/features/bench/on-demand.ts'
import { design, record, recordId } from '../../support/web-fixtures.ts'
import { type FakeServer, fakeServer, json } from '../../support/web-server.ts'

export const address = '/bench?design=DBS-A&unit=U-7'
export const found = ['0.0000013', '2.4994998', '4.9989783', '7.4984718', '9.9979342']
export const farOff = ['0.0000013', '2.4952513', '4.9905013', '7.4857513', '9.9809632']
export const unsettled = [
  ...found.slice(0, 3),
  '7.4988; 7.49875; 7.4987; 7.49866; 7.49862; 7.49855',
  '9.9979342',
]

/** A server that records as ours does: it solves again, numbers on, and replays what an idempotency key had. */
export function benchServer(role: 'engineer' | 'operator' = 'engineer'): FakeServer & { recorded: number } {
  const server = fakeServer({ role })
  const replays = new Map<string, unknown>()
  const state = Object.assign(server, { recorded: 0 })
  server.on('POST /trims', ({ body, headers }) => {
    const key = headers.get('idempotency-key') ?? ''
    if (replays.has(key)) return json(replays.get(key), 201)
    const asked = body as RecordRequest
    state.recorded += 1
    const id = recordId(state.recorded)
    const before = server.state.records.get(String(asked.follows))
    const learned = asked.effects === 'learned' && before ? (before.result as never) : undefined
    const result = asked.points ? solved(asked, asked.points, learned) : null
    const verdict = result === null ? null : 'trim' in result ? result.trim.verdict : result.outcome
    const answer = record(state.recorded, {
      kind: asked.kind,
      unit: asked.unit,
      applied: asked.applied ?? null,
      points: asked.points ?? null,
      follows: typeof asked.follows === 'string' ? asked.follows : null,
      pass: (before?.pass ?? 0) + (asked.kind === 'verify' ? 0 : 1),
      result: result as never,
      verdict,
      accepted: verdict !== null && ['ok', 'too-coarse', 'pass', 'conditional-pass'].includes(verdict),
      recordedAt: new Date().toISOString(),
    })
    server.state.records.set(id, answer)
    replays.set(key, answer)
    return json(answer, 201)
  })
  return state
}

function solved(asked: RecordRequest, points: NonNullable<RecordRequest['points']>, learned?: PreviousPass) {
  if (asked.kind === 'verify') return verifyPoints(design, points)
  return computeCodes(design, points, { applied: asked.applied, ...(learned ? { learned } : {}) })
}

export const grid = () => screen.findByRole('grid')

export async function cell(row: number, column: string): Promise<HTMLElement> {
  const table = await grid()
  const found = table.querySelector<HTMLElement>(`[data-cell="${row}-${column}"]`)
  if (!found) throw new Error(`no cell ${row} ${column}`)
  return found
}

/** Puts the focus on a cell, as a click would. */
export async function focusCell(row: number, name: string): Promise<HTMLElement> {
  const at = await cell(row, name)
  act(() => at.focus())
  return at
}

export async function column(name: string): Promise<string[]> {
  const table = await grid()
  return [...table.querySelectorAll(`[data-cell$="-${name}"]`)].map((one) => one.textContent ?? '')
}

export async function paste(text: string, row = 0, name = 'measured'): Promise<void> {
  const at = await cell(row, name)
  act(() => at.focus())
  await act(async () => {
    fireEvent.paste(at, { clipboardData: { getData: () => text } })
    // What reads blocks, and what solves, loads with the first of them.
    await Promise.all([loadPaste(), import('../../../src/features/bench/solving.ts')])
  })
}

export const pasteBlock = (values: readonly string[]) => paste(`${values.join('\r\n')}\r\n`)

export const gainCode = () => screen.findByRole('status', { name: 'gain code' })

export const step = (name: RegExp) => within(screen.getByRole('region', { name }))
