import { act, fireEvent, screen, waitFor, within } from '@testing-library/react'
import { expect, test } from 'vitest'
import { designLine, revision } from '../../support/web-fixtures.ts'
import { open } from '../../support/web-render.tsx'
import { fakeServer, json, refusal } from '../../support/web-server.ts'

const draft = '/designs/DBS-A/revisions/2'
const box = (name: string) => document.querySelector<HTMLInputElement>(`[data-field="${name}"]`)!
const ready = () => screen.findByText('gain covers')
const reply = (number: 1 | 2, change: object) => json({ ...revision(number), ...change })

/** A server that keeps a draft as ours does. */
function draftServer() {
  const server = fakeServer({ role: 'engineer' })
  server.on('PUT /designs/DBS-A/revisions/2', ({ headers }) => {
    const { document: _, bytes: __, ...summary } = revision(2)
    const seen = headers.get('if-match')
    if (seen !== revision(2).etag)
      return refusal('precondition-failed', 'It was changed after you opened it.')
    return json({ ...summary, etag: '"next"', savedAt: '2026-12-01T14:07:31Z' })
  })
  return server
}

test('the answer follows the keys, an error greys it and names its field, undo brings it back', async () => {
  const { user } = open(draft, draftServer())
  await ready()
  const margin = box('margin')
  await user.clear(margin)
  await user.type(margin, '30 uV')
  await waitFor(() =>
    expect(margin).toHaveAccessibleDescription('Margin takes ppm or %. 30 uV is a voltage.'),
  )
  await screen.findByText(/Answer for the last good values, \d\d:\d\d:\d\d UTC\. Margin takes/)
  expect(screen.getByText('gain covers')).toBeVisible()
  await user.keyboard('{Control>}z{/Control}')
  expect(margin.value).toBe('25 %')
  await waitFor(() => expect(screen.queryByText(/Answer for the last good values/)).toBeNull())
  await user.keyboard('{Control>}y{/Control}')
  expect(margin.value).toBe('30 uV')
})

test('a draft is saved after a pause with the etag it was typed over', async () => {
  const server = draftServer()
  const { user } = open(draft, server)
  await ready()
  await user.clear(box('margin'))
  await user.type(box('margin'), '30 %')
  await screen.findByText(/saved 14:07:31/)
  const [sent] = server.sent('PUT /designs/DBS-A/revisions/2')
  expect(sent?.headers.get('if-match')).toBe(revision(2).etag)
  expect(sent?.body).toMatchObject({ document: { sizing: { margin: 0.3 } } })
})

test('sent to review with the last key in it, however soon after it', async () => {
  const server = draftServer()
  server.on('POST /designs/DBS-A/revisions/2/review', () => reply(2, { state: 'in-review' }))
  open(draft, server)
  await ready()
  act(() => {
    fireEvent.change(box('margin'), { target: { value: '31 %' } })
    fireEvent.keyDown(box('margin'), { key: 'Enter', ctrlKey: true })
  })
  await waitFor(() => expect(server.sent('POST /designs/DBS-A/revisions/2/review')).toHaveLength(1))
  expect(server.sent('PUT /designs/DBS-A/revisions/2')[0]?.body).toMatchObject({
    document: { sizing: { margin: 0.31 } },
  })
})

test('what is typed is kept on this computer from the form itself, at once when the page goes', async () => {
  open(draft, draftServer())
  await ready()
  fireEvent.change(box('margin'), { target: { value: '32.0 %' } })
  fireEvent(window, new Event('pagehide'))
  const kept = localStorage.getItem('ogee.design.draft.DBS-A.2')
  expect(JSON.parse(kept ?? '{}')).toMatchObject({ doc: { values: { margin: '32.0 %' } } })
})

test('opening and looking saves nothing', async () => {
  const server = draftServer()
  open(draft, server)
  await ready()
  await new Promise((resolve) => setTimeout(resolve, 1600))
  expect(server.sent('PUT /designs/DBS-A/revisions/2')).toEqual([])
})

test('somebody saved meanwhile: who, when, how much; mine becomes a draft of its own', async () => {
  const server = draftServer()
  const { user } = open(draft, server)
  await ready()
  const theirs = structuredClone(revision(2).document)
  theirs.target.residual.value = 1
  server.on('PUT /designs/DBS-A/revisions/2', () => refusal('precondition-failed', 'Changed.'))
  server.on('GET /designs/DBS-A/revisions/2', () =>
    reply(2, { document: theirs, savedBy: 'M. Okafor', savedAt: '2026-12-01T14:07:31Z', etag: '"theirs"' }),
  )
  server.on('POST /designs/DBS-A/revisions', () => {
    const { document: _, bytes: __, ...summary } = revision(2)
    return json({ ...summary, number: 3 }, 201)
  })
  await user.clear(box('margin'))
  await user.type(box('margin'), '30 %')
  await screen.findByText(
    'M. Okafor saved this draft at 14:07:31 UTC, after you opened it. Differences: 2 fields.',
  )
  await user.click(screen.getByRole('button', { name: 'Show' }))
  const table = await screen.findByRole('table', { name: 'Fields that differ' })
  expect(within(table).getByText('30 %')).toBeVisible()
  await user.click(screen.getByRole('button', { name: 'Keep mine as a new draft' }))
  await waitFor(() => expect(server.sent('POST /designs/DBS-A/revisions')).toHaveLength(1))
  expect(server.sent('POST /designs/DBS-A/revisions')[0]?.body).toMatchObject({
    document: { sizing: { margin: 0.3 } },
  })
})

test('budget lines by the keyboard: Enter adds below, Alt moves, Ctrl Z undoes; 3 jumps there', async () => {
  const { user } = open(draft, draftServer())
  await ready()
  screen.getByRole('main').focus()
  await user.keyboard('3')
  const first = screen.getByRole('textbox', { name: 'Line, gain line 1' })
  expect(document.activeElement).toBe(first)
  await user.keyboard('{Enter}')
  await waitFor(() =>
    expect(document.activeElement).toBe(screen.getByRole('textbox', { name: 'Line, gain line 2' })),
  )
  await user.keyboard('Solder heat')
  await user.keyboard('{Alt>}{ArrowUp}{/Alt}')
  expect(screen.getByRole('textbox', { name: 'Line, gain line 1' })).toHaveValue('Solder heat')
  for (let i = 0; i < 3; i++) await user.keyboard('{Control>}z{/Control}')
  expect(screen.getByRole('textbox', { name: 'Line, gain line 1' })).toHaveValue('Converter gain error')
  expect(screen.queryByDisplayValue('Solder heat')).toBeNull()
})

test('a file is read in one step; another version and a fault inside are refused by place', async () => {
  const { user } = open(draft, draftServer())
  await ready()
  const input = await screen.findByLabelText('Design document to import')
  const file = (value: unknown) =>
    new File([typeof value === 'string' ? value : JSON.stringify(value)], 'd.json', {
      type: 'application/json',
    })
  const { document: own } = revision(2)
  await user.upload(input, file({ ...own, format: 'ogee.design/2' }))
  await screen.findByText('d.json is of format ogee.design/2; this page reads ogee.design/1.')
  await user.upload(input, file('{"format": '))
  await screen.findByText(/d\.json is not JSON/)
  await user.upload(input, file({ ...own, converter: { ...own.converter, bits: 30 } }))
  await screen.findByText(/d\.json, \/converter\/bits: /)
  await user.upload(
    input,
    file({ ...own, converter: { ...own.converter, bits: 16 }, measurement: { points: [0, 65535] } }),
  )
  await waitFor(() => expect(box('bits').value).toBe('16 bits'))
  await user.keyboard('{Control>}z{/Control}')
  expect(box('bits').value).toBe('18 bits')
})

test('a cell of the table is tried without saving, kept or dropped', async () => {
  const server = draftServer()
  const { user } = open(draft, server)
  await ready()
  const cell = await screen.findAllByRole('button', { name: /^14 bits/ })
  await user.click(cell[0]!)
  await screen.findByText('This is tried and not saved.')
  expect(box('gain.bits').value).toBe('14 bits')
  expect(window.location.hash).toMatch(/^#try=/)
  await new Promise((resolve) => setTimeout(resolve, 1500))
  expect(server.sent('PUT /designs/DBS-A/revisions/2')).toEqual([])
  await user.click(screen.getByRole('button', { name: 'Drop it' }))
  expect(box('gain.bits').value).toBe('12 bits')
  expect(window.location.hash).toBe('')
})

test('an adjuster does something else in a second range: its fields are those of the adjuster', async () => {
  const server = draftServer()
  const { user } = open(draft, server)
  await ready()
  await user.click(screen.getByRole('button', { name: 'add a range' }))
  const here = (label: string) => screen.getByLabelText(`${label} in range 2`)
  expect(here('Effect here, gain')).toHaveDisplayValue("as the adjuster's")
  await user.selectOptions(here('Effect here, gain'), 'output-summing')
  // What is read where nothing is chosen stands there.
  expect(here('Sign, gain')).toHaveDisplayValue('inverting')
  const range = screen.getAllByLabelText(/^Range 2/).find((one) => one.dataset.field?.endsWith('.ends'))!
  fireEvent.change(range, { target: { value: '-5 V to 5 V' } })
  fireEvent.change(here('R feedback, gain'), { target: { value: '10k' } })
  fireEvent.change(here('R adjust, gain'), { target: { value: '2M' } })
  await waitFor(
    () =>
      expect(server.sent('PUT /designs/DBS-A/revisions/2').at(-1)?.body).toMatchObject({
        document: {
          ranges: [
            {},
            {
              effects: {
                gain: { kind: 'output-summing', feedbackOhm: 1e4, adjustOhm: 2e6, inverting: true },
              },
            },
          ],
        },
      }),
    { timeout: 8000 },
  )
})

test('no gain adjuster: the page says what the offset adjuster alone does', async () => {
  const { user } = open(draft, draftServer())
  await ready()
  await user.selectOptions(screen.getByRole('combobox', { name: 'Effect, gain' }), 'none')
  await waitFor(() =>
    expect(
      screen.getAllByText(/This design has no gain adjuster\. The offset adjuster alone nulls the error/)[0],
    ).toBeVisible(),
  )
  expect(screen.queryByText('gain covers')).toBeNull()
})

test('in review: the author is told who releases; another engineer may', async () => {
  const server = draftServer()
  const { id } = (await (await server.fetch('/api/v1/me')).json()).who
  const inReview = { state: 'in-review', writers: [{ kind: 'person', id, name: 'M. Okafor' }] }
  server.on('GET /designs/DBS-A/revisions/2', () => reply(2, { ...inReview, authorMayRelease: false }))
  const first = open(draft, server)
  await first.findByText('You wrote this revision, so someone else releases it.')
  expect(first.queryByRole('button', { name: /^Release/ })).toBeNull()
  first.unmount()
  server.on('GET /designs/DBS-A/revisions/2', () => reply(2, { ...inReview, writers: [] }))
  open(draft, server)
  expect(await screen.findByRole('button', { name: 'Release revision 2' })).toBeVisible()
})

test.each(['operator', 'auditor', 'administrator'] as const)('%s reads and has no acts', async (role) => {
  open(draft, fakeServer({ role }))
  await ready()
  expect(document.querySelector('[data-field]')).toBeNull()
  expect(screen.queryByRole('button', { name: 'Send to review' })).toBeNull()
  expect(screen.queryByRole('button', { name: 'Import' })).toBeNull()
})

test('withdrawing says what still uses it and wants a reason', async () => {
  const server = draftServer()
  const one = {
    revision: 1,
    lots: 2,
    openLots: { count: 1, first: ['L-7'] },
    units: { count: 1, first: ['U-1'] },
  }
  server.on('GET /designs/DBS-A/use', () => json({ items: [one] }))
  const { user } = open(`/designs/${designLine.key}/revisions/1`, server)
  await user.click(await screen.findByRole('button', { name: 'Withdraw' }))
  const dialog = within(await screen.findByRole('dialog'))
  await dialog.findByText('Still used by 2 lots, 1 open: L-7; 1 unit carries its codes: U-1.')
  await user.click(dialog.getByRole('button', { name: 'Withdraw' }))
  expect(dialog.getByLabelText('Reason')).toHaveAccessibleDescription(
    'Give a reason of at least 10 characters.',
  )
  expect(server.sent('POST /designs/DBS-A/revisions/1/withdrawal')).toEqual([])
})
