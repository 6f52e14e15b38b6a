import { act, render, screen } from '@testing-library/react'
import { lazy, Suspense } from 'react'
import { beforeEach, expect, test, vi } from 'vitest'
import { NotOnPaper, WhenNear } from '../../src/ui/when-near.tsx'

// Nothing comes near by itself.
beforeEach(() => {
  vi.stubGlobal(
    'IntersectionObserver',
    class {
      observe() {}
      disconnect() {}
    },
  )
})

const print = () => window.dispatchEvent(new Event('beforeprint'))

test('what is not near yet is on the paper all the same: it is drawn before the listener returns', () => {
  render(
    <WhenNear name="part" minHeight={40}>
      <p>the part</p>
    </WhenNear>,
  )
  expect(screen.queryByText('the part')).toBeNull()
  print()
  expect(screen.getByText('the part')).toBeVisible()
})

test('what must first be loaded says on paper that it is missing, and is there for the next print', async () => {
  let arrive = (_: { default: () => React.ReactNode }) => {}
  const Part = lazy(() => new Promise<{ default: () => React.ReactNode }>((resolve) => (arrive = resolve)))
  render(
    <WhenNear name="part" minHeight={40}>
      <Suspense fallback={<NotOnPaper what="Resistors" />}>
        <Part />
      </Suspense>
    </WhenNear>,
  )
  print()
  const said = screen.getByText('Resistors: not ready when this was printed. Print again.')
  expect(said.className).toMatch(/hidden .*print:block/)
  await act(async () => arrive({ default: () => <p>the part</p> }))
  expect(screen.getByText('the part')).toBeVisible()
  expect(screen.queryByText(/not ready/)).toBeNull()
})
