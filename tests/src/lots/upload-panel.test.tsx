import { QueryClientProvider } from '@tanstack/react-query'
import { act, fireEvent, render, screen, waitFor } from '@testing-library/react'
import { userEvent } from '@testing-library/user-event'
import { afterEach, expect, test, vi } from 'vitest'
import { designDocument } from '../../../shared/contract/design.ts'
import { type ErrorCode, errorTable } from '../../../shared/errors.ts'
import UploadPanel from '../../../src/features/lot/upload/upload-panel.tsx'
import { makeQueryClient } from '../../../src/lib/query-client.ts'
import { lotDetail } from '../../support/lot-fixtures.ts'
import { exampleDesign } from '../../support/solver-fixtures.ts'
import { record } from '../../support/web-fixtures.ts'

const design = designDocument.parse({ ...exampleDesign('unipolar-18'), channels: ['1'] })
const csv = `unit,code,measured\n${['a', 'b'].map((unit) => `${unit},0,0\n${unit},262143,10\n`).join('')}`
const fileOf = (text: string, name: string) => new File([text], name, { type: 'text/csv' })

/** What becomes of each line of each block, in turn; the last holds for all that follow. */
function serverThat(...blocks: (ErrorCode | 'recorded')[][]) {
  const sent: { unit: string; kind?: string }[][] = []
  vi.stubGlobal('fetch', async (_: string, { body }: { body: string }) => {
    const block = body.trimEnd().split('\n')
    const becomes = blocks[Math.min(sent.length, blocks.length - 1)]!
    sent.push(block.map((line) => JSON.parse(line)))
    const outcomes = block.map((_, i) => outcomeOf(i + 1, becomes[i] ?? 'recorded'))
    const end = { end: true, lines: block.length, recorded: 0, replayed: 0, refused: 0 }
    return new Response([...outcomes, end].map((one) => `${JSON.stringify(one)}\n`).join(''))
  })
  return sent
}

function outcomeOf(line: number, code: ErrorCode | 'recorded') {
  const about = { line, key: `k${line}` }
  if (code === 'recorded') return { ...about, status: 201, record: record(line) }
  const { status, title } = errorTable[code]
  const problem = { type: `/problems/${code}`, title, status, detail: `No: ${code}.`, code }
  return { ...about, status, problem }
}

function panel() {
  const shown = render(
    <QueryClientProvider client={makeQueryClient()}>
      <UploadPanel lot={lotDetail()} design={design} onClose={() => undefined} />
    </QueryClientProvider>,
  )
  const input = shown.container.querySelector<HTMLInputElement>('[data-upload]')!
  return { user: userEvent.setup(), input, zone: input.closest('div')! }
}

async function recordAll() {
  const { user, input } = panel()
  await user.upload(input, fileOf(csv, 'points.csv'))
  await user.click(await screen.findByRole('button', { name: 'Record 2 measurements' }))
  return user
}

afterEach(() => vi.unstubAllGlobals())

test('a line that the server could not see to makes the block go again', async () => {
  const sent = serverThat(['recorded', 'database-unavailable'], ['recorded', 'recorded'])
  await recordAll()
  await waitFor(() => expect(screen.getByRole('status')).toHaveTextContent(/2 (measurements )?recorded/))
  expect(sent.map((block) => block.map(({ unit }) => unit))).toEqual([
    ['a', 'b'],
    ['a', 'b'],
  ])
  expect(screen.queryByText('left out')).toBeNull()
})

test('a session that ended within a block stops at that block, which can go on', async () => {
  const sent = serverThat(['recorded', 'sign-in-required'], ['recorded', 'recorded'])
  const user = await recordAll()
  const goOn = await screen.findByRole('button', { name: 'Go on' })
  expect(sent).toHaveLength(1)
  expect(screen.getByText(/Your session had ended/)).toBeVisible()
  await user.click(goOn)
  await waitFor(() => expect(screen.getByRole('status')).toHaveTextContent(/2 (measurements )?recorded/))
  expect(sent).toHaveLength(2)
})

test('a measurement that is refused for itself is left out and not sent again', async () => {
  const sent = serverThat(['recorded', 'lot-closed'])
  await recordAll()
  await screen.findByText('left out')
  expect(sent).toHaveLength(1)
})

/** A file whose bytes come when `give` is called. */
function slowFile(text: string, name: string) {
  const file = fileOf(text, name)
  let give: (bytes: ArrayBuffer) => void
  const bytes = new Promise<ArrayBuffer>((resolve) => {
    give = resolve
  })
  file.arrayBuffer = () => bytes
  return { file, give: () => give(new TextEncoder().encode(text).buffer as ArrayBuffer) }
}

/** Waits longer than planning takes: what is not shown by then was not taken. */
async function comesLate({ give }: ReturnType<typeof slowFile>): Promise<void> {
  give()
  await act(() => new Promise((resolve) => setTimeout(resolve, 100)))
}

test('a plan made for "as found" is not taken once the choice is "as left"', async () => {
  const sent = serverThat(['recorded'])
  const { user, zone } = panel()
  const slow = slowFile(csv, 'found.csv')
  fireEvent.drop(zone, { dataTransfer: { files: [slow.file] } })
  await user.click(screen.getByRole('radio', { name: 'as left' }))
  fireEvent.drop(zone, { dataTransfer: { files: [fileOf(csv, 'left.csv')] } })
  await screen.findByRole('button', { name: 'Record 2 measurements' })
  await comesLate(slow)
  await user.click(screen.getByRole('button', { name: 'Record 2 measurements' }))
  await waitFor(() => expect(sent).toHaveLength(1))
  expect(sent[0]!.map(({ kind }) => kind)).toEqual(['verify', 'verify'])
})

test('of two files the later one counts, whichever is read first', async () => {
  serverThat(['recorded'])
  const { zone } = panel()
  const slow = slowFile(csv, 'first.csv')
  fireEvent.drop(zone, { dataTransfer: { files: [slow.file] } })
  const one = fileOf('unit,code,measured\nc,0,0\nc,262143,10\n', 'second.csv')
  fireEvent.drop(zone, { dataTransfer: { files: [one] } })
  await screen.findByRole('button', { name: 'Record 1 measurement' })
  await comesLate(slow)
  expect(screen.getByRole('button', { name: 'Record 1 measurement' })).toBeVisible()
})
