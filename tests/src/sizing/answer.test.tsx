import { render, screen, waitFor, within } from '@testing-library/react'
import { userEvent } from '@testing-library/user-event'
import { useState } from 'react'
import { describe, expect, test, vi } from 'vitest'
import { sizeDesign } from '../../../shared/solver/sizing/size.ts'
import { resolutionSpanTable } from '../../../shared/solver/sizing/span-table.ts'
import type { SizingDesign } from '../../../shared/solver/sizing/types.ts'
import { PassForecast } from '../../../src/features/sizing/pass-forecast.tsx'
import { ResidualBars } from '../../../src/features/sizing/residual-bars.tsx'
import type { ResidualUnit } from '../../../src/features/sizing/residual-units.ts'
import { SpanTable } from '../../../src/features/sizing/span-table.tsx'
import { piecesOf } from '../../../src/features/sizing/verdict-lines.ts'
import { VerdictRows } from '../../../src/features/sizing/verdict-rows.tsx'
import { states, unipolar } from './designs.ts'

const noisy: SizingDesign = { ...unipolar, measurement: { ...unipolar.measurement, noiseV: 6e-6 } }

describe('verdict rows', () => {
  const rows = (design: SizingDesign, onField?: (path: string) => void) =>
    render(<VerdictRows design={design} result={sizeDesign(design)} onField={onField} />)

  test('shape and word, the numbers, and the plain sentence', () => {
    const { container } = rows(unipolar)
    expect(screen.getByText('gain covers')).toBeVisible()
    expect(container).toHaveTextContent(
      'Reach 7.63 mV of 6.09 mV needed. Step 3.73 µV of 19.1 µV allowed. 12 bits hold; 10 would do.',
    )
    expect(container).toHaveTextContent(
      '12 bits over ±367 mV: reaches 25 % past what the budget asks, steps 5.1 times finer than the target needs.',
    )
  })

  test('what to change when it does not cover', () => {
    rows(states.short)
    expect(screen.getByText('Short of reach: 1.68 bits. Raise R bottom to 1.18 kΩ or more.')).toBeVisible()
  })

  test('remarks of the sizing stand below: one adjuster alone', () => {
    rows({ ...unipolar, adjusters: { offset: unipolar.adjusters.offset } })
    expect(screen.getByText(/This design has no gain adjuster\. The offset adjuster alone/)).toBeVisible()
    expect(screen.queryByText(/^gain/)).toBeNull()
  })

  test('each number explains itself by keyboard, and leads to the field that it comes from', async () => {
    const user = userEvent.setup()
    const onField = vi.fn()
    rows(unipolar, onField)
    expect(screen.getAllByRole('button').length).toBe(12)
    await user.tab()
    expect(document.activeElement).toHaveTextContent('7.63 mV')
    await user.keyboard('{Enter}')
    const shown = await screen.findByRole('dialog', { name: 'How reach of gain at the output comes about' })
    await within(shown).findByText('Available reach on the tighter side times the effect.')
    expect(shown).toHaveTextContent('Definition of this page: solver, section 6')
    await user.click(within(shown).getByRole('button', { name: '0.0208 V/V' }))
    expect(onField).toHaveBeenCalledWith('/adjusters/gain/effect')
    await user.keyboard('{Escape}')
    expect(screen.queryByRole('dialog')).toBeNull()
  })

  test('a number that a sentence does not say is left out, the rest stays whole', () => {
    const number = (text: string) => ({ text, label: text, path: text })
    const pieces = piecesOf('Reach 1 mV of 2 mV.', [number('1 mV'), number('9 V'), number('2 mV')])
    expect(pieces.map(({ text, number: found }) => (found ? `[${text}]` : text)).join('')).toBe(
      'Reach [1 mV] of [2 mV].',
    )
  })
})

describe('resolution × span', () => {
  const table = resolutionSpanTable(unipolar, 'gain')!

  test('reach stands in the heads, shape and step in the cells, the design’s own is marked', () => {
    render(<SpanTable table={table} onTry={() => undefined} />)
    expect(screen.getAllByRole('columnheader').map((head) => head.textContent)).toEqual([
      'bits',
      '±0.5 Vreach −2.0',
      '±1 Vreach −1.0',
      '±2.5 Vreach +0.3',
      '±5 Vreach +1.3',
      '±10 Vreach +2.3',
    ])
    const own = screen.getByRole('button', { current: true })
    expect(own).toHaveAccessibleName('12 bits, ±2.5 V, this design: covers, step +2.4 bits')
    expect(screen.getByRole('button', { name: '8 bits, ±1 V: both, step −0.3 bits' })).toBeInTheDocument()
  })

  test('a click tries a cell; so do arrows and Enter, from the own cell', async () => {
    const user = userEvent.setup()
    const onTry = vi.fn()
    render(<SpanTable table={table} onTry={onTry} />)
    await user.click(screen.getByRole('button', { name: /^14 bits, ±5 V/ }))
    expect(onTry).toHaveBeenLastCalledWith(14, -5, 5)
    screen.getByRole('button', { current: true }).focus()
    await user.keyboard('{ArrowUp}{ArrowRight}{Enter}')
    expect(onTry).toHaveBeenLastCalledWith(10, -5, 5)
    await user.keyboard('{Home}{ArrowUp}{ArrowUp}{Enter}')
    expect(onTry).toHaveBeenLastCalledWith(8, -0.5, 0.5)
    expect(onTry).toHaveBeenCalledTimes(3)
    expect(screen.getAllByRole('button').filter((cell) => cell.tabIndex === 0).length).toBe(1)
  })

  test('one that only shows has no buttons and says the same', () => {
    render(<SpanTable table={table} />)
    expect(screen.queryByRole('button')).toBeNull()
    expect(screen.getByText('10 bits, ±10 V: too coarse, step −1.6 bits')).toBeInTheDocument()
  })
})

function Bars({ design }: { design: SizingDesign }) {
  const [unit, setUnit] = useState<ResidualUnit>('V')
  return <ResidualBars design={design} result={sizeDesign(design)} unit={unit} onUnit={setUnit} />
}

describe('residual', () => {
  const lines = () => [...document.querySelectorAll<HTMLElement>('tbody tr')]

  test('largest first, each by its path, with where it comes from and its share', () => {
    render(<Bars design={noisy} />)
    const { residual } = sizeDesign(noisy)
    expect(lines().map((row) => row.querySelector('th')?.textContent)).toEqual(
      residual.lines.map(({ name }) => name),
    )
    const widths = lines().map((row) =>
      Number.parseFloat(row.querySelector('svg')?.getAttribute('width') ?? ''),
    )
    expect([...widths].sort((a, b) => b - a)).toEqual(widths)
    expect(lines().map((row) => row.dataset.path)).toEqual(residual.lines.map(({ path }) => path))
    const looks = { gain: 'fill-copper', offset: 'fill-tide', neither: 'fill-ink' }
    for (const [i, row] of lines().entries()) {
      expect(row.querySelector('rect')).toHaveClass(looks[residual.lines[i]!.path])
    }
    expect(lines()[0]).toHaveTextContent('Reference drift20 ppm200.005.2420.0077 %, by way of gain')
    expect(screen.getByText(/Reference drift makes 77 % of it, and no trim removes it\./)).toBeVisible()
  })

  test('worst case and root sum square close the table', () => {
    render(<Bars design={noisy} />)
    const { residual } = sizeDesign(noisy)
    const totals = [...document.querySelectorAll('tfoot tr')].map((row) => row.textContent)
    expect(totals[0]).toBe(
      `Worst case, sum${(residual.worstCaseV * 1e6).toFixed(2)}${residual.worstCaseLsb.toFixed(2)}${residual.worstCasePpm.toFixed(2)}`,
    )
    expect(totals[1]).toBe(
      `Root sum square, 95 %${(residual.rssV * 1e6).toFixed(2)}${residual.rssLsb.toFixed(2)}${residual.rssPpm.toFixed(2)}`,
    )
  })

  test('the switch chooses the column that stays on a narrow page', async () => {
    const user = userEvent.setup()
    render(<Bars design={noisy} />)
    const kept = () =>
      screen.getAllByRole('columnheader').filter((head) => head.className.includes('table-cell font-medium'))
    expect(kept().map((head) => head.textContent)).toEqual(['µV'])
    await user.click(screen.getByRole('radio', { name: 'ppm' }))
    expect(kept().map((head) => head.textContent)).toEqual(['ppm'])
  })

  test('a line explains itself; the table is copied with every digit', async () => {
    const user = userEvent.setup()
    const write = vi.spyOn(navigator.clipboard, 'writeText').mockResolvedValue()
    render(<Bars design={noisy} />)
    await user.click(screen.getByRole('button', { name: 'Quantising, gain' }))
    expect(screen.getByRole('dialog')).toHaveTextContent('Half a step of the auxiliary DAC, at the output.')
    await user.click(screen.getByRole('button', { name: 'CSV' }))
    await waitFor(() => expect(write).toHaveBeenCalled())
    const [first] = sizeDesign(noisy).residual.lines
    expect(write.mock.lastCall![0].split('\r\n')[1]).toBe(
      [
        first!.name,
        first!.path,
        first!.worstV,
        first!.standardV,
        first!.worstLsb,
        first!.worstPpm,
        first!.share,
      ].join(),
    )
  })
})

test('passes to the target, stated and measured effect; not within 9 is said', () => {
  const { container, rerender } = render(<PassForecast design={noisy} result={sizeDesign(noisy)} />)
  expect(container).toHaveTextContent(
    'Passes to the target, worst case: 4 with the effect as stated (±20 %), 2 with the effect taken again from pass 1.',
  )
  rerender(<PassForecast design={states.coarse} result={sizeDesign(states.coarse)} />)
  expect(container).toHaveTextContent('not within 9 with the effect as stated')
})
