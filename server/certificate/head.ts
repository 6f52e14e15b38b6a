import type { CertificateFacts } from './facts.ts'
import { ink, page, type Sheet } from './sheet.ts'
import { day, quantity, time, whole } from './words.ts'

/** What it is, of which unit, under which design, measured by whom with what. */
export function putHead(sheet: Sheet, facts: CertificateFacts): void {
  const { subject, design } = facts
  sheet.put('Trim and verification record', page.left, sheet.y, { size: 7.5, colour: ink.second })
  sheet.y += 11
  const several = design.ranges.length > 1 ? `, range ${subject.range}` : ''
  const title = { face: 'title', size: 16.5 } as const
  for (const line of sheet.lines(`Unit ${subject.unit}, channel ${subject.channel}${several}`, 400, title)) {
    sheet.put(line, page.left, sheet.y, title)
    sheet.y += 20
  }
  putMark(sheet, page.right - 44, sheet.y - 17)
  sheet.y += 3
  sheet.line(page.left, page.right, sheet.y, ink.text, 1.4)
  sheet.y += 6
  const middle = page.left + 252
  const top = sheet.y
  const left = putFacts(sheet, designFacts(facts), page.left, 56, middle - 12, top)
  const right = putFacts(sheet, measuredFacts(facts), middle, 56, page.right, top)
  sheet.y = Math.max(left, right)
}

/** The S-curve of the mark beside the name. */
function putMark(sheet: Sheet, x: number, y: number): void {
  const { doc } = sheet
  doc
    .save()
    .translate(x, y + 1)
    .scale(0.82)
  doc.path('M1.5 13.25H4C9.5 13.25 6.5 2.75 12 2.75H14.5').lineWidth(2.25).strokeColor(ink.text).stroke()
  doc.restore()
  sheet.put('Ogee', x + 17, y, { face: 'title', size: 12 })
}

type Fact = readonly [name: string, value: string]

function designFacts({ subject, design, revision }: CertificateFacts): Fact[] {
  const range = design.ranges.find(({ id }) => id === subject.range)
  const released =
    revision.releasedAt === null
      ? 'not released'
      : `released ${day(revision.releasedAt)} by ${revision.releasedBy ?? 'somebody'}${revision.releasedByAuthor ? ', its author' : ''}`
  const lsbV = range ? (range.highV - range.lowV) / 2 ** design.converter.bits : 0
  return [
    ['design', `${subject.design}, ${design.title}`],
    ['revision', `${subject.revision}, ${released}`],
    [
      'range',
      range
        ? `${range.label ?? `${range.lowV} V to ${range.highV} V`}, ${design.converter.bits} bits, LSB ${quantity(lsbV, 'V', 5)}`
        : subject.range,
    ],
    ['lot', subject.lot ?? 'none'],
  ]
}

function measuredFacts({ subject, left, trim, found }: CertificateFacts): Fact[] {
  const measured = left ?? trim ?? subject
  const { conditions, station, by } = measured
  const follows = found && found.id !== measured.id ? `, as found ${whole(found.number)}` : ''
  const climate = [
    conditions.temperatureC === undefined ? '' : `, ${conditions.temperatureC} °C`,
    conditions.humidityPercent === undefined ? '' : `, ${conditions.humidityPercent} % RH`,
  ].join('')
  return [
    ['record', `${whole(measured.number)}, pass ${measured.pass}${follows}`],
    ['measured', `${time(measured.measuredAt ?? measured.recordedAt)} UTC${climate}`],
    ['by', station === null || by.name.includes(station) ? by.name : `${by.name}, ${station}`],
    ['instrument', instrumentText(measured)],
  ]
}

function instrumentText({ instrument, conditions, result }: CertificateFacts['subject']): string {
  if (instrument) {
    const { id, serial, gainPpm, offsetV, dueOn } = instrument
    return `${id}, serial ${serial}, ${gainPpm} ppm and ${quantity(offsetV, 'V', 2)}, due ${dueOn}`
  }
  const limits = result?.fit?.instrument
  const name = conditions.instrument ?? 'not recorded'
  return limits
    ? `${name}; limits of the design ${limits.gainPpm} ppm and ${quantity(limits.offsetV, 'V', 2)}`
    : name
}

function putFacts(
  sheet: Sheet,
  facts: readonly Fact[],
  x: number,
  indent: number,
  right: number,
  top: number,
): number {
  let y = top
  for (const [name, value] of facts) {
    sheet.put(name, x, y, { colour: ink.second })
    for (const line of sheet.lines(value, right - x - indent)) {
      sheet.put(line, x + indent, y)
      y += 12
    }
    y += 1.5
  }
  return y
}
