import type { CertificateFacts, Verification } from './facts.ts'
import { ink, page, type Sheet } from './sheet.ts'
import { number } from './words.ts'

const height = 122
const size = 8
type Scale = (value: number) => number
type Box = { left: number; right: number; top: number; bottom: number }

/** Errors as left with their uncertainty, between tolerance and guard band. Nothing where nothing was measured as left. */
export function putPlot(sheet: Sheet, { left }: CertificateFacts, lsbV: number): void {
  if (left === null) return
  sheet.section('Error as left, against tolerance', height + 40)
  const box = {
    left: page.left + 30,
    right: page.right - 52,
    top: sheet.y + 12,
    bottom: sheet.y + height - 16,
  }
  const { points, toleranceV, rule } = left.result
  const most = Math.max(
    toleranceV,
    ...points.map(({ errorV, expandedUncertaintyV }) => Math.abs(errorV) + (expandedUncertaintyV ?? 0)),
  )
  const limit = (1.15 * most) / lsbV
  const y: Scale = (lsb) => box.bottom - ((lsb + limit) / (2 * limit)) * (box.bottom - box.top)
  const low = Math.min(...points.map(({ idealV }) => idealV))
  const high = Math.max(...points.map(({ idealV }) => idealV))
  const span = high > low ? high - low : 1
  const x: Scale = (volts) => box.left + ((volts - low) / span) * (box.right - box.left)
  putAxes(sheet, box, { x, y, limit, low, high: low + span })
  if (rule === 'guarded') putGuard(sheet, left, lsbV, x, y)
  const tolerance = toleranceV / lsbV
  for (const [side, label] of [
    [1, 'tolerance'],
    [-1, 'tolerance'],
  ] as const) {
    sheet.line(box.left, box.right, y(side * tolerance), ink.text, 1.1)
    sheet.put(label, box.right + 5, y(side * tolerance) - 5, { size })
  }
  putLine(sheet, left, lsbV, x, y)
  for (const point of points) putPoint(sheet, x(point.idealV), point, lsbV, y)
  sheet.y = box.bottom + 26
  const bars = points.some(({ expandedUncertaintyV }) => expandedUncertaintyV !== null)
    ? 'Bars: U. '
    : 'No bars: no uncertainty is known. '
  const fit = left.result.fit ? `Line: ${left.result.fit.method.replace('-', ' ')}. ` : ''
  const hatched = rule === 'guarded' ? 'Hatched: guard band, tolerance less U.' : ''
  sheet.paragraph(`${bars}${fit}${hatched}`.trim(), { size: 7.5, colour: ink.second })
}

type Axes = { x: Scale; y: Scale; limit: number; low: number; high: number }

function putAxes(sheet: Sheet, box: Box, { x, y, limit, low, high }: Axes): void {
  sheet.put('LSB', box.left - 4, box.top - 12, { size, colour: ink.second, align: 'right' })
  sheet.doc
    .moveTo(box.left, box.top)
    .lineTo(box.left, box.bottom)
    .lineWidth(0.6)
    .strokeColor(ink.rule)
    .stroke()
  const step = roundStep(limit / 3)
  const decimals = Math.max(0, -Math.floor(Math.log10(step)))
  for (let k = -Math.floor(limit / step); k * step <= limit; k++) {
    sheet.line(box.left, box.right, y(k * step), k === 0 ? ink.rule : ink.hair, 0.6)
    sheet.put(number(k * step, decimals), box.left - 5, y(k * step) - 5, {
      size,
      colour: ink.second,
      align: 'right',
    })
  }
  for (let i = 0; i <= 4; i++) {
    const volts = low + ((high - low) * i) / 4
    sheet.doc
      .moveTo(x(volts), box.bottom)
      .lineTo(x(volts), box.bottom + 3)
      .lineWidth(0.6)
      .strokeColor(ink.rule)
      .stroke()
    const text = number(volts, 1)
    sheet.put(text, x(volts) - sheet.width(text, { size }) / 2, box.bottom + 4, { size, colour: ink.second })
  }
  sheet.put('ideal output, V', box.right, box.bottom + 14, { size, colour: ink.second, align: 'right' })
}

/** 1, 2 or 5 times a power of ten, at least as large. */
function roundStep(least: number): number {
  const power = 10 ** Math.floor(Math.log10(least))
  return [1, 2, 5, 10].map((k) => k * power).find((step) => step >= least) ?? least
}

/** Hatching between the tolerance and the tolerance less U, both above and below. */
function putGuard(sheet: Sheet, { result }: Verification, lsbV: number, x: Scale, y: Scale): void {
  const points = [...result.points].sort((a, b) => a.idealV - b.idealV)
  const tolerance = result.toleranceV / lsbV
  for (const side of [1, -1]) {
    const { doc } = sheet
    const inner = points.map(({ idealV, expandedUncertaintyV }) => ({
      x: x(idealV),
      y: y(side * Math.max(0, tolerance - (expandedUncertaintyV ?? 0) / lsbV)),
    }))
    const first = inner[0]
    const last = inner.at(-1)
    if (!first || !last) continue
    doc
      .save()
      .moveTo(first.x, y(side * tolerance))
      .lineTo(last.x, y(side * tolerance))
    for (const point of [...inner].reverse()) doc.lineTo(point.x, point.y)
    doc.closePath().clip()
    const [top, bottom] = [y(tolerance), y(-tolerance)]
    for (let at = first.x - (bottom - top); at < last.x; at += 4) {
      doc.moveTo(at, bottom).lineTo(at + (bottom - top), top)
    }
    doc.lineWidth(0.5).strokeColor(ink.rule).stroke().restore()
  }
}

function putLine(sheet: Sheet, { result }: Verification, lsbV: number, x: Scale, y: Scale): void {
  const residuals = [...(result.fit?.residuals ?? [])].sort((a, b) => a.idealV - b.idealV)
  const [first, last] = [residuals[0], residuals.at(-1)]
  if (!first || !last) return
  const at = ({ errorV, residualV }: typeof first) => y((errorV - residualV) / lsbV)
  sheet.doc.moveTo(x(first.idealV), at(first)).lineTo(x(last.idealV), at(last))
  sheet.doc.lineWidth(1).strokeColor(ink.text).stroke()
  sheet.put('as left', x(last.idealV) + 5, at(last) - 5, { size })
}

type Judged = Verification['result']['points'][number]

function putPoint(
  { doc }: Sheet,
  x: number,
  { errorV, expandedUncertaintyV }: Judged,
  lsbV: number,
  y: Scale,
): void {
  doc
    .circle(x, y(errorV / lsbV), 2.2)
    .fillColor(ink.text)
    .fill()
  if (expandedUncertaintyV === null) return
  const [top, bottom] = [y((errorV + expandedUncertaintyV) / lsbV), y((errorV - expandedUncertaintyV) / lsbV)]
  doc
    .moveTo(x - 2.2, top)
    .lineTo(x + 2.2, top)
    .moveTo(x, top)
    .lineTo(x, bottom)
  doc
    .moveTo(x - 2.2, bottom)
    .lineTo(x + 2.2, bottom)
    .lineWidth(0.9)
    .strokeColor(ink.text)
    .stroke()
}
