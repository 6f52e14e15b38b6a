import { fireEvent, screen } from '@testing-library/react'
import { expect, test } from 'vitest'
import { open } from '../../support/web-render.tsx'
import { address, benchServer, cell, column, focusCell, found, paste, pasteBlock } from './bench-page.ts'

test('typing replaces, Enter goes down, and the text stays as typed', async () => {
  const { user } = open(address, benchServer())
  await focusCell(0, 'measured')
  await user.keyboard('0.0000013{Enter}2.4990{Enter}')
  expect(document.activeElement).toBe(await cell(2, 'measured'))
  expect(await column('measured')).toEqual(['0.0000013', '2.4990', '', '', ''])
  await user.keyboard('{ArrowUp}2.5')
  expect(document.activeElement?.tagName).toBe('INPUT')
  await user.keyboard('{Escape}')
  expect((await column('measured'))[1]).toBe('2.4990')
})

test('F2 edits at the end, arrows stay in the field then, Tab goes right and on to the next row', async () => {
  const { user } = open(address, benchServer())
  await pasteBlock(['1.1'])
  await focusCell(0, 'measured')
  await user.keyboard('{F2}0{ArrowLeft}{ArrowLeft}5{Tab}')
  expect((await column('measured'))[0]).toBe('1.510')
  expect(document.activeElement).toBe(await cell(1, 'code'))
  await user.keyboard('{Shift>}{Tab}{/Shift}')
  expect(document.activeElement).toBe(await cell(0, 'measured'))
})

test('Tab at the last cell leaves the grid: nobody is caught in it', async () => {
  const { user } = open(address, benchServer())
  await focusCell(4, 'measured')
  await user.tab()
  expect((await cell(0, 'code')).closest('table')?.contains(document.activeElement)).toBe(false)
})

test('Shift and arrows select, Delete clears in one step, Ctrl Z and Ctrl Y walk every step', async () => {
  const { user } = open(address, benchServer())
  await pasteBlock(found)
  await focusCell(1, 'measured')
  await user.keyboard('{Shift>}{ArrowDown}{ArrowDown}{/Shift}')
  expect((await cell(3, 'measured')).getAttribute('aria-selected')).toBe('true')
  expect((await cell(0, 'measured')).getAttribute('aria-selected')).toBe('false')
  await user.keyboard('{Delete}')
  expect(await column('measured')).toEqual([found[0], '', '', '', found[4]])
  await user.keyboard('{Control>}z{/Control}')
  expect(await column('measured')).toEqual(found)
  await user.keyboard('{Control>}z{/Control}')
  expect(await column('measured')).toEqual(['', '', '', '', ''])
  await user.keyboard('{Control>}yy{/Control}')
  expect(await column('measured')).toEqual([found[0], '', '', '', found[4]])
})

test('a block comes in at the focused cell, adds rows, and one undo takes it back', async () => {
  const { user } = open(address, benchServer())
  await paste('"1000"\t0.038147 V\r\n0x7D0\t76.294 mV\r\n', 4, 'code')
  expect(await column('code')).toEqual(['0', '65536', '131072', '196608', '1000', '0x7D0'])
  expect(await column('measured')).toEqual(['', '', '', '', '0.038147 V', '76.294 mV'])
  await user.keyboard('{Control>}z{/Control}')
  expect(await column('code')).toEqual(['0', '65536', '131072', '196608', '262143'])
  expect(await column('measured')).toEqual(['', '', '', '', ''])
})

test('a cell that cannot be read is refused by name and leaves what was there', async () => {
  open(address, benchServer())
  await pasteBlock(found)
  await pasteBlock(['0.0000014', 'abc', '4.9989784'])
  expect(await column('measured')).toEqual(['0.0000014', found[1], '4.9989784', found[3], found[4]])
  expect(screen.getByText('2 of 3 cells taken.')).toBeVisible()
  expect(screen.getByText(/^Cell 2, abc:/)).toBeVisible()
})

test('a comma is asked about; [Yes, all] stays within the one undo of the paste', async () => {
  const { user } = open(address, benchServer())
  await pasteBlock(['0.0000013', '2,4994998', '4.9989783', '7,4984718', '9.9979342'])
  expect(await column('measured')).toEqual([found[0], '', found[2], '', found[4]])
  await screen.findByText(/3 of 5 cells taken\. Cell 2, 2,4994998: a comma\. Is it a decimal comma\?/)
  await user.click(screen.getByRole('button', { name: 'Yes, all' }))
  expect(await column('measured')).toEqual(found)
  await focusCell(0, 'measured')
  await user.keyboard('{Control>}z{/Control}')
  expect(await column('measured')).toEqual(['', '', '', '', ''])
})

test('codes and readings pasted on the readings go where they belong, and that is said', async () => {
  open(address, benchServer())
  await paste('0\t0.001\r\n65536\t2.501\r\n', 0, 'measured')
  expect((await column('measured')).slice(0, 2)).toEqual(['0.001', '2.501'])
  expect(screen.getByText(/the block begins at the code column/)).toBeVisible()
})

test('what is copied is ASCII and pastes back to the same cells', async () => {
  const { user } = open(address, benchServer())
  await pasteBlock(['\u22121.3 \u00b5V', '2.4994998', '4998.9783 mV', '7.4984718', '9.9979342'])
  const at = await focusCell(0, 'code')
  await user.keyboard('{Control>}a{/Control}')
  const copied: string[] = []
  fireEvent.copy(at, { clipboardData: { setData: (_: string, text: string) => copied.push(text) } })
  const lines = (copied[0] ?? '').split('\r\n').map((line) => line.split('\t'))
  expect(lines[0]?.[2]).toBe('-1.3 uV')
  // biome-ignore lint/suspicious/noControlCharactersInRegex: ASCII is the claim
  expect(copied[0]).toMatch(/^[\x00-\x7f]*$/)
  // Computed cells carry every digit: the error of row 2 in volts.
  expect(Number(lines[1]?.[3])).toBe(2.4994998 - 2.5)
  await paste(lines.map((line) => line[2]).join('\r\n'))
  expect(await column('error')).toEqual([
    '\u22121.3',
    '\u2212500.2',
    '\u22121021.7',
    '\u22121528.2',
    '\u22122027.7',
  ])
})

test('codes are decimal, hex or a wanted voltage; arithmetic and several readings count', async () => {
  const { user } = open(address, benchServer())
  await user.click(await screen.findByRole('button', { name: 'Add row' }))
  await paste('0x20000', 1, 'code')
  expect(await column('ideal')).toContain('5.000000')
  await focusCell(1, 'code')
  await user.keyboard('2.5 V{Enter}')
  expect((await column('ideal'))[1]).toBe('2.500000')
  await focusCell(0, 'measured')
  await user.keyboard('3*12 uV + 5 uV{Enter}')
  await screen.findByText('= 0.0000410')
  expect((await column('error'))[0]).toBe('+41.0')
  await user.keyboard('2.4994; 2.4996{Enter}')
  expect((await column('measured'))[1]).toBe('2.4995000, n = 2')
})

test('empty, "e" and "+" never become 0, and 1.5 is no code', async () => {
  const { user } = open(address, benchServer())
  for (const text of ['e', '+', '1.2.3']) {
    await focusCell(0, 'measured')
    await user.keyboard(`${text}{Enter}`)
    expect((await cell(0, 'measured')).getAttribute('aria-invalid')).toBe('true')
    expect((await column('error'))[0]).toBe('')
  }
  await focusCell(1, 'code')
  await user.keyboard('1.5{Enter}')
  expect(screen.getByText(/1\.5 is not a code\. Write a whole number/)).toBeVisible()
})

test('a barcode reader on a cell fills the unit and leaves the cell; a meter that types as fast fills the cell', async () => {
  open(address, benchServer())
  await focusCell(0, 'measured')
  const type = (text: string) => {
    let when = 1000
    for (const key of [...text, 'Enter']) {
      const target = document.activeElement ?? document.body
      const event = new KeyboardEvent('keydown', { key, bubbles: true, cancelable: true })
      when += 4
      Object.defineProperty(event, 'timeStamp', { value: when })
      if (!fireEvent(target, event) || key === 'Enter') continue
      const field = document.activeElement as HTMLInputElement
      fireEvent.change(field, { target: { value: field.value + key } })
    }
  }
  type('2.4994998')
  expect((await column('measured'))[0]).toBe('2.4994998')
  await focusCell(1, 'measured')
  type('DBS-24170-032')
  await screen.findByRole('heading', { name: 'Unit DBS-24170-032, channel 1' })
  expect(await column('measured')).toEqual(['', '', '', '', ''])
})
