import { screen, waitFor } from '@testing-library/react'
import { expect, test } from 'vitest'
import { readStored } from '../../../src/lib/storage.ts'
import * as fixtures from '../../support/web-fixtures.ts'
import { open } from '../../support/web-render.tsx'
import { json } from '../../support/web-server.ts'
import { address, benchServer, found, pasteBlock } from './bench-page.ts'

const field = () => screen.findByLabelText('instrument')
const record = () => screen.findByRole('button', { name: /^Record/ })

test('the instrument that is chosen goes with the record, gives the bars, and is remembered here', async () => {
  const server = benchServer()
  const first = open(address, server)
  await pasteBlock(found)
  expect(await field()).toHaveValue('')
  expect((await screen.findAllByText(/instrument limits 3 ppm and 2\.00 µV/))[0]).toBeInTheDocument()
  await first.user.selectOptions(await field(), 'DMM-07')
  expect((await screen.findAllByText(/instrument limits 4 ppm and 1\.00 µV/))[0]).toBeInTheDocument()
  await first.user.click(await record())
  await screen.findByText(/^Recorded as/)
  expect(server.sent('POST /trims')[0]?.body).toMatchObject({ conditions: { instrument: 'DMM-07' } })
  expect(readStored('bench.instrument')).toBe('DMM-07')
  first.unmount()
  open(address.replace('U-7', 'U-8'), server)
  await waitFor(async () => expect(await field()).toHaveValue('DMM-07'))
})

test('readings keep the instrument that they were typed under, whatever is remembered since', async () => {
  localStorage.setItem('ogee.bench.instrument', '"DMM-12"')
  const server = benchServer()
  const first = open(address, server)
  await pasteBlock(found)
  first.unmount()
  localStorage.setItem('ogee.bench.instrument', '"DMM-07"')
  open(address, server)
  await waitFor(async () => expect(await field()).toHaveValue('DMM-12'))
})

test('an overdue one shuts recording and says what is needed; where the site allows it, what will be said', async () => {
  localStorage.setItem('ogee.bench.instrument', '"DMM-08"')
  const server = benchServer()
  const first = open(address, server)
  await pasteBlock(found)
  const due = fixtures.day(-1)
  await screen.findByText(`DMM-08 was due on ${due}. Recording needs another instrument.`)
  expect(await record()).toBeDisabled()
  await first.user.selectOptions(await field(), 'DMM-12')
  await waitFor(async () => expect(await record()).toBeEnabled())
  first.unmount()
  localStorage.clear()
  localStorage.setItem('ogee.bench.instrument', '"DMM-08"')
  server.on('GET /instruments', () => json({ items: fixtures.instruments, overdueAllowed: true }))
  open(address.replace('U-7', 'U-9'), server)
  await screen.findByText(`DMM-08 was due on ${due}. The site allows it; the record will say so.`)
})

test('one that is retired or unknown by now is named and not taken silently', async () => {
  localStorage.setItem('ogee.bench.instrument', '"DMM-02"')
  const server = benchServer()
  const first = open(address, server)
  await screen.findByText('DMM-02 is retired. Choose another.')
  first.unmount()
  localStorage.clear()
  localStorage.setItem('ogee.bench.instrument', '"DMM-99"')
  open(address.replace('U-7', 'U-9'), server)
  await screen.findByText('There is no instrument DMM-99. Choose another.')
})
