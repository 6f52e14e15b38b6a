import type { CertificateFacts } from './facts.ts'
import { putHead } from './head.ts'
import { putPlot } from './plot.ts'
import { putProof } from './proof.ts'
import { putResult } from './result.ts'
import { ink, page, Sheet } from './sheet.ts'
import { putLines, putPoints } from './tables.ts'
import { time } from './words.ts'

const cautions =
  'Cautions. Changing trim codes moves a live output: disable or make safe whatever it drives (actuators, lasers, supplies) first. Do not exceed the absolute ratings of the adjust node. Discharge the circuit and mind electrostatic discharge.'
const support =
  'Supports, and does not replace, the judgement of whoever is responsible. Calibration claims follow the site’s accredited procedures and local rules.'

/**
 * The certificate as a PDF. The same facts and time give the same bytes: nothing in it comes from anywhere else.
 */
export function renderCertificate(facts: CertificateFacts, printedAt: Date): Promise<Buffer> {
  const { subject, design } = facts
  const sheet = new Sheet({
    title: `Unit ${subject.unit}, channel ${subject.channel}, record ${subject.number}`,
    at: printedAt,
  })
  const done = collected(sheet)
  const range = design.ranges.find(({ id }) => id === subject.range)
  const lsbV = range ? (range.highV - range.lowV) / 2 ** design.converter.bits : 1
  putHead(sheet, facts)
  putResult(sheet, facts)
  putPoints(sheet, facts, lsbV)
  putPlot(sheet, facts, lsbV)
  putLines(sheet, facts)
  putProof(sheet, facts, printedAt)
  putSignatures(sheet)
  putFeet(sheet, printedAt)
  sheet.doc.end()
  return done
}

function collected({ doc }: Sheet): Promise<Buffer> {
  const chunks: Buffer[] = []
  return new Promise((resolve, reject) => {
    doc.on('data', (chunk: Buffer) => chunks.push(chunk))
    doc.on('end', () => resolve(Buffer.concat(chunks)))
    doc.on('error', reject)
  })
}

function putSignatures(sheet: Sheet): void {
  sheet.y += 6
  sheet.room(70)
  sheet.paragraph(cautions, { size: 7.5, colour: ink.second })
  const y = Math.min(page.bottom - 14, sheet.y + 36)
  const middle = page.left + 252
  for (const [x, end, name] of [
    [page.left, middle - 14, 'Measured by'],
    [middle, page.right, 'Approved by'],
  ] as const) {
    sheet.line(x, end, y, ink.text, 0.8)
    sheet.put(name, x, y + 3, { size: 7.5, colour: ink.second })
  }
  sheet.y = y + 14
}

/** On every page, once it is known how many there are. */
function putFeet(sheet: Sheet, printedAt: Date): void {
  const { count } = sheet.doc.bufferedPageRange()
  for (let i = 0; i < count; i++) {
    sheet.doc.switchToPage(i)
    const text = `${support} Page ${i + 1} of ${count}. Printed ${time(printedAt.toISOString())} UTC.`
    const style = { size: 7.5, colour: ink.second }
    for (const [n, line] of sheet.lines(text, page.right - page.left, style).entries()) {
      sheet.put(line, page.left, page.height - 54 + n * 10, style)
    }
  }
}
