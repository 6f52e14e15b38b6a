import { readFileSync } from 'node:fs'
import { render, screen } from '@testing-library/react'
import { userEvent } from '@testing-library/user-event'
import { expect, test, vi } from 'vitest'
import { AsLeftPlot } from '../../../src/features/plot/as-left-plot.tsx'
import { ErrorPlot } from '../../../src/features/plot/error-plot.tsx'
import type { PlotPoint } from '../../../src/features/plot/plot-data.ts'
import { ReadingsPlot } from '../../../src/features/plot/readings-plot.tsx'
import { ResidualStrip } from '../../../src/features/plot/residual-strip.tsx'
import { csvText, svgText } from '../../../src/ui/plot/copy-plot.ts'
import { spread } from '../../../src/ui/plot/end-labels.tsx'
import { lightColours } from '../../../src/ui/plot/light-colours.ts'

const range = { lowV: 0, highV: 10, lsbV: 10 / 2 ** 18 }
const point = (code: number, errorV: number, barV: number | null): PlotPoint => ({
  code,
  idealV: code * range.lsbV,
  errorV,
  residualV: 1e-6,
  barV,
})
const points = [point(0, 1.3e-6, 3e-6), point(131072, -0.0010217, 9e-6), point(262143, -0.0020277, 3e-5)]
const line = { offsetV: 1.9e-6, slope: -203.4e-6, pivotV: 0 }
const U = 'expanded uncertainty U, 95 %, of the stated u'

const errorPlot = (bars: string | null = U, drawn = points) => (
  <ErrorPlot
    title="Error as found"
    range={range}
    points={drawn}
    line={line}
    predicted={null}
    bars={bars}
    method="best fit"
  />
)

test('one tab stop; arrows, Home and End walk the points, each with its name', async () => {
  const user = userEvent.setup()
  render(errorPlot())
  const stops = screen.getAllByRole('img')
  expect(stops.map((stop) => stop.getAttribute('tabindex'))).toEqual(['0', '-1', '-1'])
  stops[0]?.focus()
  await user.keyboard('{ArrowRight}')
  expect(document.activeElement).toHaveAccessibleName(
    'Code 131\u2009072, ideal 5.000000 V: error \u22121021.7 µV ± 9.00 µV, \u221226.78 LSB, residual +0.03 LSB',
  )
  await user.keyboard('{End}')
  expect(document.activeElement).toBe(stops[2])
  await user.keyboard('{ArrowRight}{Home}')
  expect(document.activeElement).toBe(stops[0])
})

test('the caption says what the bars are, that they are too small to see, or that there are none', () => {
  const { rerender } = render(errorPlot())
  expect(
    screen.getByText(
      /Bars of expanded uncertainty U, 95 %, of the stated u \(at most 30\.0 µV\) are smaller than the circles\./,
    ),
  ).toBeVisible()
  rerender(errorPlot(U, [point(0, 0, 1e-4), point(262143, 5e-4, 1e-4)]))
  expect(screen.getByText(/Bars: expanded uncertainty U, 95 %, of the stated u\./)).toBeVisible()
  rerender(errorPlot(null, [point(0, 0, null), point(262143, 5e-4, null)]))
  expect(screen.getByText(/No error bars: the points carry no uncertainty\./)).toBeVisible()
})

test('the line is taken apart: offset in tide at the offset point, gain in copper at full scale', () => {
  const { container } = render(errorPlot())
  expect(screen.getByText('offset +1.90 µV')).toHaveAttribute('fill', 'var(--tide)')
  expect(screen.getByText('gain \u2212203.4 ppm')).toHaveAttribute('fill', 'var(--copper)')
  const copper = container.querySelector('line[stroke="var(--copper)"]')
  expect(copper?.getAttribute('x1')).toBe(copper?.getAttribute('x2'))
})

test('unit switch, and the same numbers as a table', async () => {
  const user = userEvent.setup()
  render(errorPlot())
  await user.click(screen.getByRole('radio', { name: 'ppm' }))
  expect(screen.getByText('ppm', { selector: 'text' })).toBeInTheDocument()
  await user.click(screen.getByRole('radio', { name: 'table' }))
  const rows = screen.getAllByRole('row').map((row) => [...row.children].map((cell) => cell.textContent))
  expect(rows[2]).toEqual([
    '131\u2009072',
    '5.000000',
    '\u22121021.7',
    '\u221226.78',
    '\u2212102.17',
    '+0.03',
    '9.0',
  ])
})

test('copied as SVG in light colours without what only the page needs; as CSV with every digit', async () => {
  const user = userEvent.setup()
  const write = vi.spyOn(navigator.clipboard, 'writeText')
  render(errorPlot())
  await user.click(screen.getByRole('button', { name: 'SVG' }))
  const svg = String(write.mock.calls[0]?.[0])
  expect(svg).toMatch(/^<svg[^>]* xmlns="http:\/\/www\.w3\.org\/2000\/svg"/)
  expect(svg).not.toMatch(/var\(|tabindex|data-stop/)
  expect(svg).toContain(lightColours.copper)
  await user.click(screen.getByRole('button', { name: 'CSV' }))
  const [head, , second] = String(write.mock.calls[1]?.[0]).split('\r\n')
  expect(head).toBe('code,ideal_v,error_v,residual_v,bar_v')
  expect(second?.split(',').map(Number)).toEqual([131072, 131072 * range.lsbV, -0.0010217, 1e-6, 9e-6])
})

test('light colours are those of the tokens', () => {
  const tokens = readFileSync('src/ui/tokens.css', 'utf8')
  const light = tokens.slice(0, tokens.indexOf('@media'))
  for (const [name, value] of Object.entries(lightColours)) expect(light).toContain(`--${name}: ${value};`)
})

test('as left: tolerance on both sides, the latest pass filled, the earlier one open, both walked', () => {
  const pass = (label: string) => ({ label, points, line })
  render(
    <AsLeftPlot
      title="As left"
      range={range}
      latest={pass('pass 3')}
      earlier={pass('pass 2')}
      predicted={null}
      toleranceV={range.lsbV}
      isGuarded
      bars={U}
    />,
  )
  expect(screen.getAllByText('tolerance')).toHaveLength(2)
  expect(screen.getAllByRole('img', { name: /^pass 3\. Code/ })).toHaveLength(3)
  expect(screen.getAllByRole('img', { name: /^pass 2\. Code/ })).toHaveLength(3)
  expect(
    screen.getByText(/Dots: pass 3\. Open: pass 2\..*Hatched: guard band, tolerance less U\./),
  ).toBeVisible()
})

test('residuals and readings have captions and stops of their own', () => {
  render(
    <>
      <ResidualStrip
        title="Residual"
        points={points}
        range={range}
        caption="Diamond: the point that is flagged."
      />
      <ReadingsPlot
        code={196608}
        readings={[7.4988, 7.4987, 7.4986, 7.4985]}
        range={range}
        allowedLsb={0.25}
      />
    </>,
  )
  expect(screen.getAllByRole('img', { name: /^Reading \d/ })).toHaveLength(4)
  expect(
    screen.getByText(
      /straight-line change, \u22127\.9 LSB over all\. Hatched: the change allowed, 0\.25 LSB\. No error bars/,
    ),
  ).toBeVisible()
  expect(screen.getAllByRole('img', { name: /^Code/ })).toHaveLength(3)
})

test('labels that would cover one another are moved apart and stay in order', () => {
  const label = (y: number, text: string) => ({ y, text, colour: '' })
  const placed = spread([label(104, 'b'), label(100, 'a'), label(200, 'c')])
  expect(placed.map((one) => one.text)).toEqual(['a', 'b', 'c'])
  expect((placed[1]?.y ?? 0) - (placed[0]?.y ?? 0)).toBe(13)
  expect(placed[2]?.y).toBe(200)
})

test('CSV quotes what needs quoting and leaves numbers alone', () => {
  expect(
    csvText(
      ['a', 'b'],
      [
        [-1.5e-7, 'x,"y"'],
        [null, 'z'],
      ],
    ),
  ).toBe('a,b\r\n-1.5e-7,"x,""y"""\r\n,z\r\n')
})

test('a drawing is copied without changing the page', () => {
  const { container } = render(errorPlot())
  const svg = container.querySelector('svg') as SVGSVGElement
  const before = svg.outerHTML
  svgText(svg)
  expect(svg.outerHTML).toBe(before)
})
