import { act, screen, waitFor } from '@testing-library/react'
import { expect, test } from 'vitest'
import type { VerifyResult } from '../../../shared/solver/types.ts'
import { decisionSentences } from '../../../src/features/bench/words.ts'
import { recordId } from '../../support/web-fixtures.ts'
import { open } from '../../support/web-render.tsx'
import { verifyResult } from '../../support/web-results.ts'
import { address, benchServer, column, focusCell, found, pasteBlock, step } from './bench-page.ts'

const good = ['0.0000010', '2.5000089', '4.9999957', '7.4999972', '9.9999688']
const off = ['0.0000010', '2.5000289', '5.0000457', '7.5000672', '10.0000488']
const button = (name: RegExp) => screen.findByRole('button', { name })

/** Records as found, and opens the second pass, measured with the codes that it gave. */
async function secondPass(server = benchServer()) {
  const opened = open(address, server)
  await pasteBlock(found)
  await opened.user.click(await button(/^Record/))
  await screen.findByText(/^Recorded as/)
  await opened.user.click(screen.getAllByRole('button', { name: /Second pass/ })[0] as HTMLElement)
  await screen.findByRole('grid', { name: 'Points as left, pass 2' })
  return { ...opened, server }
}

test('what passes is recorded as left by Ctrl Enter: a verification of the codes that were loaded', async () => {
  const { user, server } = await secondPass()
  await pasteBlock(good)
  await screen.findByText(/Tolerance less U decides\. Probability of conforming at least \d\d\.\d %\./)
  expect(await button(/Record pass 2/)).toBeEnabled()
  expect(await button(/Record as left/)).toHaveTextContent(/Ctrl Enter/)
  await focusCell(0, 'measured')
  await user.keyboard('{Control>}{Enter}{/Control}')
  await screen.findByText(/^Recorded as left, as/)
  const { body } = server.sent('POST /trims')[1] ?? {}
  expect(body).toMatchObject({
    kind: 'verify',
    follows: recordId(1),
    applied: { gain: 2593, offset: 2048 },
    points: good.map((text) => ({ measured: Number(text) })),
  })
  expect(body).not.toHaveProperty('effects')
  expect(screen.queryByText(/Its codes are not accepted/)).toBeNull()
  expect(await button(/Next unit/)).toBeEnabled()
  // The codes that these points would lead to were not recorded; the ones that are loaded stay, large.
  expect(step(/Codes loaded/).getByRole('status', { name: 'gain code' })).toHaveTextContent('2593')
  expect(screen.queryByText(/Loading codes moves a live output/)).toBeNull()
  const main = screen.getByRole('main')
  act(() => main.focus())
  await user.keyboard('G')
  await waitFor(async () => expect(await navigator.clipboard.readText()).toBe('2593'))

  // Going on from there: the same codes are still loaded, and the verification is what is followed.
  await user.click(screen.getAllByRole('button', { name: /Second pass/ })[0] as HTMLElement)
  await screen.findByText(/follows record/)
  const params = new URLSearchParams(window.location.search)
  expect(params.get('follows')).toBe(recordId(2))
  expect(params.get('applied')).toBe('gain=2593,offset=2048')
  expect(screen.getByText(/follows record/)).toHaveTextContent(/conditional pass/)
  await pasteBlock(off)
  // Nothing has moved since the verification, so the pass before it teaches, as on the server.
  await screen.findByText(/Effect taken again from pass 1: slope/)
})

test('what fails leads to new codes first, and can be recorded as left all the same', async () => {
  const { user, server } = await secondPass()
  await pasteBlock(off)
  expect(await column('decision')).toContain('fail')
  expect(await button(/Record pass 2/)).toHaveTextContent(/Ctrl Enter/)
  await user.click(await button(/Record as left/))
  await screen.findByText(/^Recorded as left, as/)
  expect(server.sent('POST /trims')[1]?.body).toMatchObject({ kind: 'verify' })
})

test('the rule, the chance of conforming and a poor ratio are said; never rounded up to certainty', () => {
  const change = (part: Partial<VerifyResult>) => ({ ...verifyResult, ...part }) as VerifyResult
  const chance = (p: number | null) =>
    decisionSentences(
      change({ points: verifyResult.points.map((point) => ({ ...point, conformanceProbability: p })) }),
    )[0]
  expect(chance(0.9999)).toBe('Tolerance less U decides. Probability of conforming over 99.9 %.')
  expect(chance(0.9978)).toBe('Tolerance less U decides. Probability of conforming at least 99.7 %.')
  expect(chance(null)).toBe('Tolerance less U decides.')
  expect(decisionSentences(change({ rule: 'simple', tur: 1.94, notes: ['tur-under-4'] }))).toEqual([
    'Tolerance alone decides. Probability of conforming at least 99.8 %.',
    'Test uncertainty ratio 1.9, under 4: take more readings or a better instrument.',
  ])
  expect(decisionSentences(change({ notes: ['guard-band-too-wide'] }))[1]).toBe(
    'U is over the tolerance: such a point can never pass.',
  )
})
