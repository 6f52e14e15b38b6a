import { screen, waitFor } from '@testing-library/react'
import { expect, test } from 'vitest'
import { design, revision } from '../../support/web-fixtures.ts'
import { open } from '../../support/web-render.tsx'
import { json } from '../../support/web-server.ts'
import {
  address,
  benchServer,
  column,
  farOff,
  focusCell,
  found,
  gainCode,
  pasteBlock,
  step,
  unsettled,
} from './bench-page.ts'

test('empty: what to do, and where codes will stand', async () => {
  open(address, benchServer())
  await screen.findByText(/Type the first reading, or paste a block/)
  expect(screen.getByText('Codes stand here once two codes are measured.')).toBeVisible()
  expect(screen.getByRole('button', { name: /^Record/ })).toBeDisabled()
})

test('one point gives no line and no error', async () => {
  open(address, benchServer())
  await pasteBlock(found.slice(0, 1))
  expect(screen.getByText(/Two different codes are the least that gives a line/)).toBeVisible()
  expect(screen.queryByText(/cells are in error/)).toBeNull()
})

test('two points give a line and no uncertainty, and the page says so', async () => {
  const bare = { ...design, measurement: { ...design.measurement, noiseV: undefined } }
  const server = benchServer()
  server.on('GET /designs/DBS-A/revisions/:number', () => json({ ...revision(1), document: bare }))
  open(address, server)
  await pasteBlock(found.slice(0, 2))
  await screen.findByText('Two points give a line and no uncertainty. Measure a third.')
  expect(await gainCode()).toBeVisible()
})

test('five points: codes large, decimal and hex, the fit with U, the caution before the copy', async () => {
  open(address, benchServer())
  await pasteBlock(found)
  expect((await gainCode()).textContent).toBe('2593')
  expect(screen.getByText('0xA21')).toBeVisible()
  expect(
    step(/As found/)
      .getByText('offset error')
      .closest('tr')?.textContent,
  ).toMatch(/\+1\.9 µV15\.5 µV/)
  const caution = screen.getByText(/Loading codes moves a live output/)
  const copy = screen.getByRole('button', { name: 'copy gain code 2593' })
  expect(caution.compareDocumentPosition(copy) & Node.DOCUMENT_POSITION_FOLLOWING).toBeTruthy()
})

test('millivolts typed as volts: refused at their cells, read as mV on request, one undo', async () => {
  const { user } = open(address, benchServer())
  const typed = ['0.0013', '2499.4998', '4998.9783', '7498.4718', '9997.9342']
  await pasteBlock(typed)
  await screen.findByText(/is 4994 V from ideal; 5 % of FSR is allowed/)
  await user.click(screen.getByRole('button', { name: 'Read as mV' }))
  expect((await gainCode()).textContent).toBe('2593')
  expect(await column('measured')).toEqual(typed.map((text) => `${text} mV`))
  await focusCell(0, 'measured')
  await user.keyboard('{Control>}z{/Control}')
  expect(await column('measured')).toEqual(typed)
})

test('a cell in error greys the answer to the last good one and takes the copying away', async () => {
  const { user } = open(address, benchServer())
  await pasteBlock(found)
  await gainCode()
  await focusCell(1, 'measured')
  await user.keyboard('{F2}x')
  await screen.findByText(/Answer for the last good values, \d\d:\d\d:\d\d UTC/)
  expect((await gainCode()).textContent).toBe('2593')
  expect(screen.queryByRole('button', { name: /copy gain code/i })).toBeNull()
  expect(screen.getByRole('button', { name: /^Record/ })).toBeDisabled()
  await user.keyboard('{Escape}')
  expect(screen.getByRole('button', { name: /^Record/ })).toBeEnabled()
})

test.each([
  [
    'code above full scale',
    '262144',
    'code',
    /Code 262144 does not exist|Code .* does not exist: the highest is/,
  ],
  ['target outside the range', '10.2 V', 'code', /lies outside the range/],
  ['u of 0', '0', 'u', /must be over 0 V/],
  ['text in a number cell', 'abc', 'measured', /abc cannot be read as a number|abc: /],
])('bad input, %s: placed at its cell', async (_, text, name, sentence) => {
  const { user } = open(address, benchServer())
  await pasteBlock(found)
  if (name === 'u') await user.click(screen.getByRole('button', { name: 'With u' }))
  const at = await focusCell(2, name)
  await user.keyboard(`${text}{Enter}`)
  await waitFor(() => expect(at.getAttribute('aria-invalid')).toBe('true'))
  const described = document.getElementById(at.getAttribute('aria-describedby') ?? '')
  expect(described?.textContent).toMatch(sentence)
  expect((await column(name))[2]).toBe(text)
})

test('out of reach: no code, the table of what falls short, and it can be recorded', async () => {
  const server = benchServer()
  const { user } = open(address, server)
  await pasteBlock(farOff)
  await screen.findByText('No code is given. A clipped code is not a trim.')
  expect(screen.queryByRole('status', { name: 'gain code' })).toBeNull()
  const short = step(/What falls short/)
  expect((await short.findByText('wanted')).closest('tr')?.textContent).toMatch(/\+913\.5 mV.*\+1900 ppm/)
  expect(short.getByText('limit of the codes').closest('tr')?.textContent).toMatch(/\+367\.0 mV/)
  expect(short.getByText('would remain').closest('tr')?.textContent).toMatch(/\u221211\.37 mV/)
  await user.click(screen.getByRole('button', { name: /Record out of reach/ }))
  await screen.findByText(/Its codes are not accepted\./)
  expect(server.recorded).toBe(1)
})

test('too coarse: codes stand, and the sentence names the step', async () => {
  const coarse = { ...design, target: { residual: { value: 0.01, unit: 'LSB' } } }
  const server = benchServer()
  server.on('GET /designs/DBS-A/revisions/:number', () => json({ ...revision(1), document: coarse }))
  open(address, server)
  await pasteBlock(found)
  await screen.findByText(
    /Predicted worst 0\.05 LSB, target 0\.01 LSB\. The offset step is too coarse; see the design\./,
  )
  expect((await gainCode()).textContent).toBe('2593')
})

test('a draft is computed and never recorded', async () => {
  open('/bench?design=DBS-A&revision=2&unit=U-7', benchServer('operator'))
  await pasteBlock(found)
  await screen.findByText('Revision 2 is a draft. Trims are recorded under released revisions only: 1.')
  expect(await gainCode()).toBeVisible()
  expect(screen.getByRole('button', { name: /^Record/ })).toBeDisabled()
})

test('without a unit nothing is recorded: the field says so and takes the focus', async () => {
  const server = benchServer()
  const { user } = open('/bench?design=DBS-A', server)
  await pasteBlock(found)
  await user.click(await screen.findByRole('button', { name: /^Record/ }))
  expect(document.activeElement).toBe(screen.getByLabelText('unit'))
  expect(screen.getByLabelText('unit')).toHaveAccessibleDescription('Unit is missing.')
  expect(server.recorded).toBe(0)
})

test('suspect: flags in words, codes marked, the readings drawn, and read again as the first act', async () => {
  const { user } = open(address, benchServer())
  await pasteBlock(unsettled)
  await screen.findByText('unsettled')
  expect(await screen.findByText(/One point was not settled when it was read/)).toBeVisible()
  expect(screen.getByText(/Marked, not hidden/)).toBeVisible()
  expect(await screen.findByRole('figure', { name: /Readings in order, code 196/ })).toBeVisible()
  await user.click(screen.getByRole('button', { name: /Read code 196608 again/ }))
  expect(document.activeElement?.getAttribute('data-cell')).toBe('3-measured')
})

test('ideal values at chosen codes', async () => {
  const { user } = open(address, benchServer())
  await screen.findByRole('grid')
  screen.getByRole('main').focus()
  await user.keyboard('i')
  const codes = await screen.findByLabelText('codes')
  await user.clear(codes)
  await user.type(codes, '0x100, 262144')
  expect(screen.getByText(/Code 262144 does not exist/)).toBeVisible()
  await user.clear(codes)
  await user.type(codes, '131072')
  expect(screen.getByText('0x20000').closest('tr')?.textContent).toBe('1310720x200005.0000000')
})
