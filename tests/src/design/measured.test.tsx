import { fireEvent, screen, waitFor } from '@testing-library/react'
import { expect, test } from 'vitest'
import { volts } from '../../../shared/design-words/words.ts'
import { parsePointsCsv } from '../../../shared/points/parse-csv.ts'
import { unitErrorsOf } from '../../../shared/points/unit-errors.ts'
import { measuredUnits } from '../../../shared/solver/sizing/measured-units.ts'
import { sizeDesign } from '../../../shared/solver/sizing/size.ts'
import { design } from '../../support/web-fixtures.ts'
import { open } from '../../support/web-render.tsx'
import { fakeServer } from '../../support/web-server.ts'

const draft = '/designs/DBS-A/revisions/2'
const ready = () => screen.findByText('gain covers')

/** Two points a unit: gain errors of 900, 1000 and 1100 ppm, no offset. */
const csv = `unit,code,measured\n${[900, 1000, 1100]
  .flatMap((ppm, i) => [`U-${i},0,0`, `U-${i},262143,${10 * (1 - 2 ** -18) * (1 + ppm * 1e-6)}`])
  .join('\n')}\n`

async function paste(text: string) {
  const { user } = open(draft, fakeServer({ role: 'engineer' }))
  await ready()
  await user.click(screen.getByRole('button', { name: 'take extents from measured units' }))
  fireEvent.change(await screen.findByLabelText('Points CSV'), { target: { value: text } })
  await user.click(screen.getByRole('button', { name: 'Use' }))
  return user
}

test('measured units stand in the place of the initial lines, say their factor, and go again', async () => {
  const user = await paste(csv)
  await screen.findByText(
    /From 3 measured units in what was pasted: mean ± \d+\.\d+ times their standard deviation, which holds 99 % of all units with 95 % confidence\./,
  )
  const units = measuredUnits(unitErrorsOf(parsePointsCsv(csv).groups, design, 'u10'))
  const { adjusters } = sizeDesign(design, { measuredUnits: units })
  const needed = volts(adjusters.gain!.requiredReachOutputV)
  const main = screen.getByRole('main')
  await waitFor(() => expect(main).toHaveTextContent(`of ${needed} needed`))
  expect(main).toHaveTextContent('gain short of reach')
  expect(main).toHaveTextContent('gain, 3 units and drift')
  expect(screen.getByText(/not saved with the design, and a link does not carry it/)).toBeVisible()
  await user.click(screen.getByRole('button', { name: "back to the budget's lines" }))
  await ready()
  expect(main).toHaveTextContent('gain, worst case / RSS')
})

test('a bad row, a unit alone and a unit that the design cannot have are refused by place', async () => {
  const user = await paste(csv.replace('U-1,0,0', 'U-1,0,zero'))
  await screen.findByText(/what was pasted: Line 4, measured: /)
  const again = async (text: string) => {
    fireEvent.change(screen.getByLabelText('Points CSV'), { target: { value: text } })
    await user.click(screen.getByRole('button', { name: 'Use' }))
  }
  await again('unit,code,measured\nU-1,0,0\nU-1,262143,10\n')
  expect(await screen.findByRole('alert')).toHaveTextContent(
    'One unit: two are the least that show a spread.',
  )
  await user.click(screen.getByRole('button', { name: "back to the budget's lines" }))
  await user.click(screen.getByRole('button', { name: 'take extents from measured units' }))
  await screen.findByLabelText('Points CSV')
  await again(csv.replaceAll('262143', '262144'))
  expect(await screen.findByRole('alert')).toHaveTextContent(/^Unit U-0, lines 2 to 3: /)
  expect(screen.getByText('gain covers')).toBeVisible()
})
