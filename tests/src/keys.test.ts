import { renderHook } from '@testing-library/react'
import { userEvent } from '@testing-library/user-event'
import { afterEach, beforeEach, expect, test, vi } from 'vitest'
import { installKeys, useKeys, useScan } from '../../src/lib/keys.ts'

let uninstall: () => void
beforeEach(() => {
  uninstall = installKeys()
  document.body.innerHTML = '<main tabindex="-1"><input aria-label="cell"></main>'
  document.querySelector('main')?.focus()
})
afterEach(() => {
  uninstall()
  document.body.innerHTML = ''
})

const pause = () => new Promise((resolve) => setTimeout(resolve, 120))

test('a barcode goes to who waits for one and triggers no key on its way', async () => {
  const next = vi.fn()
  const taken: string[] = []
  renderHook(() => {
    useKeys([
      { keys: 'D', does: 'anything', run: next },
      { keys: '1', does: 'anything', run: next },
      { keys: 'Enter', does: 'anything', run: next },
    ])
    useScan((text) => taken.push(text))
  })
  await userEvent.keyboard('DBS-24170-031{Enter}')
  await pause()
  expect(taken).toEqual(['DBS-24170-031'])
  expect(next).not.toHaveBeenCalled()
})

test('a single key still acts while a barcode is waited for, a moment later', async () => {
  const next = vi.fn()
  renderHook(() => {
    useKeys([{ keys: 'p', does: 'next pass', run: next }])
    useScan(() => undefined)
  })
  await userEvent.keyboard('p')
  await vi.waitFor(() => expect(next).toHaveBeenCalledTimes(1))
})

test('fields keep their letters, and keys with Ctrl act in them too', async () => {
  const letter = vi.fn()
  const record = vi.fn()
  renderHook(() =>
    useKeys([
      { keys: 'p', does: 'next pass', run: letter },
      { keys: 'Ctrl+Enter', does: 'record', run: record },
    ]),
  )
  const cell = document.querySelector('input')
  cell?.focus()
  await userEvent.keyboard('p{Control>}{Enter}{/Control}')
  expect(cell).toHaveValue('p')
  expect(letter).not.toHaveBeenCalled()
  expect(record).toHaveBeenCalledTimes(1)
})

test('Escape leaves a field', async () => {
  const cell = document.querySelector('input')
  cell?.focus()
  await userEvent.keyboard('{Escape}')
  expect(document.activeElement).not.toBe(cell)
})

test('the newest to name a key has it, and gives it back', async () => {
  const page = vi.fn()
  const part = vi.fn()
  renderHook(() => useKeys([{ keys: 'j', does: 'page', run: page }]))
  const { unmount } = renderHook(() => useKeys([{ keys: 'j', does: 'part', run: part }]))
  await userEvent.keyboard('j')
  unmount()
  await userEvent.keyboard('j')
  expect(part).toHaveBeenCalledTimes(1)
  expect(page).toHaveBeenCalledTimes(1)
})

test('an open dialog has the keys to itself', async () => {
  const next = vi.fn()
  renderHook(() => useKeys([{ keys: 'j', does: 'page', run: next }]))
  const dialog = document.createElement('dialog')
  dialog.open = true
  document.body.append(dialog)
  await userEvent.keyboard('j')
  expect(next).not.toHaveBeenCalled()
})
