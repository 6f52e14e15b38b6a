import { fireEvent, screen } from '@testing-library/react'
import { expect, test } from 'vitest'
import { limits } from '../../../shared/limits.ts'
import { open } from '../../support/web-render.tsx'
import { address, benchServer, column, focusCell, found, gainCode, pasteBlock } from './bench-page.ts'

const codes = [0, 65536, 131072, 196608, 262143]
const good = `code,measured\r\n${found.map((text, i) => `${codes[i]},${text}\r\n`).join('')}`

function drop(text: string, name = 'points.csv', size?: number): void {
  const file = new File([text], name, { type: 'text/csv' })
  if (size !== undefined) Object.defineProperty(file, 'size', { value: size })
  const target = screen.getByRole('grid')
  fireEvent.drop(target, { dataTransfer: { files: [file], types: ['Files'] } })
}

test('a points file fills the grid; the same doubles, one undo', async () => {
  const { user } = open(address, benchServer())
  await screen.findByRole('grid')
  await user.upload(screen.getByLabelText('Points CSV'), new File([good], 'p.csv', { type: 'text/csv' }))
  expect((await gainCode()).textContent).toBe('2593')
  expect((await column('measured')).map(Number)).toEqual(found.map(Number))
  await focusCell(0, 'measured')
  await user.keyboard('{Control>}z{/Control}')
  expect(await column('measured')).toEqual(['', '', '', '', ''])
})

test.each([
  ['empty', '', /The CSV is empty\. It needs a header row and points/],
  ['no points', 'code,measured\n', /has a header and no points/],
  ['wrong header', 'code,measurd\n0,1\n', /Line 1, column 2: Column measurd is unknown/],
  ['broken quotes', 'code,measured\n0,"1.0\n', /Line 2: a quote is opened and not closed/],
])('a file with %s is refused with its place, and the grid stays as it was', async (_, text, sentence) => {
  open(address, benchServer())
  await pasteBlock(found)
  drop(text)
  await screen.findByText(sentence)
  expect(screen.getByText(/Nothing in the grid was changed/)).toBeVisible()
  expect(await column('measured')).toEqual(found)
})

test('a file over 10 MB is refused, and the sentence names ogee batch', async () => {
  open(address, benchServer())
  await pasteBlock(found)
  drop(good, 'big.csv', limits.benchCsvMaxBytes + 1)
  await screen.findByText(/Use: ogee batch/)
  expect(await column('measured')).toEqual(found)
})

test('several units: one is chosen, and the page goes to that unit', async () => {
  const { user } = open(address, benchServer())
  await screen.findByRole('grid')
  drop('unit,channel,code,measured\nA1,1,0,0.001\nA1,1,262143,9.99\nB2,1,0,0.002\nB2,1,262143,9.98\n')
  await user.click(await screen.findByRole('button', { name: /^unit B2,/ }))
  await screen.findByRole('heading', { name: 'Unit B2, channel 1' })
  expect((await column('measured')).slice(0, 2)).toEqual(['0.002', '9.98'])
  expect(new URLSearchParams(window.location.search).get('unit')).toBe('B2')
})

test('a bad row costs its own measurement and is named by line and column', async () => {
  const { user } = open(address, benchServer())
  await screen.findByRole('grid')
  drop('unit,channel,code,measured\nA1,1,0,abc\nA1,1,262143,9.99\nB2,1,0,0.002\nB2,1,262143,9.98\n')
  await screen.findByText(/Line 2, measured/)
  expect(screen.queryByRole('button', { name: /^unit A1,/ })).toBeNull()
  await user.click(screen.getByRole('button', { name: 'Close' }))
  expect(await column('measured')).toEqual(['', '', '', '', ''])
})
