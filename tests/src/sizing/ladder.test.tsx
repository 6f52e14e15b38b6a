import { render, screen, waitFor, within } from '@testing-library/react'
import { userEvent } from '@testing-library/user-event'
import { describe, expect, test, vi } from 'vitest'
import { SmallLadder } from '../../../src/features/sizing/small-ladder.tsx'
import { TrimLadder } from '../../../src/features/sizing/trim-ladder.tsx'
import { laddersOf, scale, states, unipolar, withGain } from './designs.ts'

const drawn = (which: 'gain' | 'offset') => document.querySelector<SVGElement>(`[data-ladder="${which}"]`)!
const rungs = (which: 'gain' | 'offset', look: string) =>
  drawn(which).querySelectorAll(`[data-rung="${look}"]`).length
const show = (design = unipolar) => render(<TrimLadder ladders={laddersOf(design)} scale={scale} />)

describe('states', () => {
  test.each(Object.entries(states))(
    '%s: rungs filled, hollow and missing as the solver counts them',
    (_, design) => {
      const [ladder] = laddersOf(design)
      show(design)
      const count = (kind: string) => ladder!.rungs.filter((rung) => rung.kind === kind).length
      expect(rungs('gain', 'filled')).toBe(count('needed'))
      expect(rungs('gain', 'hollow')).toBe(count('spare'))
      expect(rungs('gain', 'missing')).toBe(count('missing'))
      expect(drawn('gain').querySelectorAll('[data-sticks-out="above"]').length).toBe(
        ladder!.shortBits > 0 ? 1 : 0,
      )
      expect(drawn('gain').querySelectorAll('[data-sticks-out="below"]').length).toBe(
        ladder!.coarseBits > 0 ? 1 : 0,
      )
    },
  )

  test.each([
    [
      'covers',
      [
        'reach 7.63 mV',
        '0.33 bit spare',
        'needs 6.09 mV',
        'allows 19.1 µV',
        '2.35 bits spare',
        'step 3.73 µV',
      ],
    ],
    ['short', ['short 1.68 bits', 'needs 6.09 mV', 'reach 1.91 mV', '4.36 bits spare', 'step 931 nV']],
    ['coarse', ['0.31 bit spare', 'coarse by 1.65 bits', 'step 59.7 µV', 'allows 19.1 µV']],
    ['both', ['short 0.20 bit', 'reach 5.32 mV', 'step 41.9 µV', 'coarse by 1.14 bits']],
  ] as const)('%s says its numbers at their marks', (name, texts) => {
    show(states[name])
    for (const text of texts)
      expect(within(drawn('gain') as unknown as HTMLElement).getByText(text)).toBeInTheDocument()
  })

  test('labels of the bracket stand a line apart or more', () => {
    show(states.both)
    const ys = ['short 0.20 bit', 'needs 6.09 mV', 'reach 5.32 mV'].map((text) =>
      Number(
        within(drawn('gain') as unknown as HTMLElement)
          .getByText(text)
          .getAttribute('y'),
      ),
    )
    expect(ys[1]! - ys[0]!).toBeGreaterThanOrEqual(12.99)
    expect(ys[2]! - ys[1]!).toBeGreaterThanOrEqual(12.99)
  })

  test('off centre: the rails end at the tighter side, the top rung stands above them, hollow', () => {
    const design = withGain({ lowV: -2, highV: 3 })
    const [ladder] = laddersOf(design)
    show(design)
    expect(ladder!.rungs.at(-1)!.outputV).toBeGreaterThan(ladder!.reachV)
    expect(rungs('gain', 'hollow')).toBe(ladder!.rungs.filter(({ kind }) => kind === 'spare').length + 1)
    expect(
      screen.getByRole('img', { name: /^Bit 11, .* above the reach of the tighter side\.$/ }),
    ).toBeInTheDocument()
  })

  test('one adjuster only: the other column is absent, not empty', () => {
    show({ ...unipolar, adjusters: { gain: unipolar.adjusters.gain } })
    expect(drawn('gain')).not.toBeNull()
    expect(document.querySelector('[data-ladder="offset"]')).toBeNull()
  })

  test('not computable: the axis and the sentence; without a scale the volts alone', () => {
    const problem = 'The two adjusters do the same thing here; they cannot be told apart.'
    const { rerender } = render(<TrimLadder ladders={laddersOf(unipolar)} scale={scale} problem={problem} />)
    expect(screen.getByText(problem)).toBeVisible()
    expect(document.querySelector('[data-ladder]')).toBeNull()
    expect(screen.getByText('LSB')).toBeInTheDocument()
    rerender(<TrimLadder ladders={[]} scale={null} />)
    expect(screen.getByText('output V')).toBeInTheDocument()
    expect(screen.queryByText('LSB')).toBeNull()
    expect(screen.queryByText('ppm FSR')).toBeNull()
  })
})

describe('axes', () => {
  test('an octave is 24 px and the axes name volts, LSB and ppm at the same heights', () => {
    show()
    const at = (which: 'gain' | 'offset') =>
      [...drawn(which).querySelectorAll('[data-rung]')].map((rung) => Number(rung.getAttribute('y')))
    const ys = at('gain').sort((a, b) => b - a)
    for (const [i, y] of ys.slice(1).entries()) expect(Math.abs(ys[i]! - y - 24)).toBeLessThan(1.01)
    const height = (text: string) => {
      const tick = screen.getAllByText(text, { selector: 'svg text' })[0]!.parentElement!
      return Number(/translate\(\S+ ([\d.]+)\)/.exec(tick.getAttribute('transform') ?? '')?.[1])
    }
    // 1 mV is 100 ppm of 10 V; a quarter LSB is 9.54 µV, a little under 10 µV.
    expect(height('1 mV')).toBeCloseTo(height('100'), 6)
    expect(height('1/4') - height('10 µV')).toBeCloseTo(24 * Math.log2(10e-6 / (scale.lsbV / 4)), 6)
  })
})

describe('keyboard and speech', () => {
  test('up and down walk the rungs, Home is the lowest, End says the reach', async () => {
    const user = userEvent.setup()
    show()
    await user.tab()
    await user.tab()
    expect(document.activeElement).toHaveAccessibleName('Bit 0, 3.73 µV at the output, 0.098 LSB, to spare.')
    await user.keyboard('{ArrowUp}{ArrowUp}')
    expect(document.activeElement).toHaveAccessibleName('Bit 2, 14.9 µV at the output, 0.39 LSB, needed.')
    await user.keyboard('{ArrowDown}')
    expect(document.activeElement).toHaveAccessibleName('Bit 1, 7.46 µV at the output, 0.20 LSB, to spare.')
    await user.keyboard('{End}')
    expect(document.activeElement).toHaveAccessibleName('Reach 7.63 mV, 6.09 mV needed, 0.33 bit to spare.')
    await user.keyboard('{ArrowUp}{Home}')
    expect(document.activeElement).toHaveAccessibleName(/^Bit 0/)
    // One tab stop a ladder.
    await user.tab()
    expect(document.activeElement?.closest('[data-ladder]')).toBe(drawn('offset'))
  })

  test('missing bits are walked too and say so', () => {
    show(states.both)
    expect(screen.getAllByRole('img', { name: /^A bit below, .*, missing\.$/ }).length).toBe(2)
    expect(screen.getAllByRole('img', { name: /^A bit above, .*, missing\.$/ }).length).toBe(1)
    expect(
      screen.getByRole('img', { name: 'Reach 5.32 mV, 6.09 mV needed, short by 0.20 bit.' }),
    ).toBeInTheDocument()
  })

  test('one sentence for the whole, then a table of every rung', () => {
    show()
    const sentence =
      'Gain covers. Reach 7.63 mV, 6.09 mV needed, 0.33 bit to spare. Step 3.73 µV, 19.1 µV allowed, 2.35 bits to spare.'
    expect(screen.getByRole('group', { name: sentence })).toBe(drawn('gain'))
    const table = screen.getByRole('table', { name: 'Trim ladder, rung by rung' })
    expect(within(table).getAllByRole('row').length).toBe(1 + 24)
    expect(within(table).getAllByRole('row')[10]).toHaveTextContent('gain214.9 µV0.391.49needed')
  })
})

test('shown as a table, copied as CSV with every digit and as SVG in light colours', async () => {
  const user = userEvent.setup()
  const copied: string[] = []
  vi.spyOn(navigator.clipboard, 'writeText').mockImplementation((text) => {
    copied.push(text)
    return Promise.resolve()
  })
  show()
  await user.click(screen.getByRole('button', { name: 'SVG' }))
  await waitFor(() => expect(copied).toHaveLength(1))
  await user.click(screen.getByRole('button', { name: 'CSV' }))
  await waitFor(() => expect(copied).toHaveLength(2))
  expect(copied[0]).toContain('#a64b12')
  expect(copied[0]).not.toContain('var(')
  const [head, first] = copied[1]!.split('\r\n')
  expect(head).toBe('adjuster,bit,output_v,lsb,ppm_of_fsr,kind')
  const top = laddersOf(unipolar)[0]!.rungs.at(-1)!
  expect(first).toBe(`gain,11,${top.outputV},${top.lsb},${top.ppm},needed`)
  await user.click(screen.getByRole('radio', { name: 'table' }))
  expect(document.querySelector('[data-ladder]')).toBeNull()
  expect(screen.getByRole('table', { name: 'Trim ladder, as a table' })).toBeVisible()
})

test('the small form is one picture with one sentence', () => {
  const [ladder] = laddersOf(states.short)
  render(<SmallLadder ladder={ladder!} />)
  expect(screen.getByRole('img', { name: /^Gain short of reach\. Reach 1\.91 mV/ })).toBeInTheDocument()
})
