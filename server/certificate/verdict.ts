import type { RecordBody } from '../../shared/contract/record.ts'
import { ink, type Sheet, type Style } from './sheet.ts'

type Verdict = NonNullable<RecordBody['verdict']>

const looks: Record<
  Verdict,
  { word: string; colour: string; draw: (sheet: Sheet, x: number, y: number, r: number) => void }
> = {
  ok: { word: 'ok', colour: ink.good, draw: disc },
  pass: { word: 'pass', colour: ink.good, draw: disc },
  'conditional-pass': { word: 'conditional pass', colour: ink.caution, draw: halfDisc },
  'conditional-fail': { word: 'conditional fail', colour: ink.bad, draw: halfSquare },
  fail: { word: 'fail', colour: ink.bad, draw: crossedSquare },
  'out-of-reach': { word: 'out of reach', colour: ink.bad, draw: pressedTriangle },
  'too-coarse': { word: 'too coarse', colour: ink.caution, draw: stair },
  suspect: { word: 'suspect', colour: ink.suspect, draw: diamond },
}

/** A verdict is shape, word and colour; gives where it ends. */
export function putVerdict(sheet: Sheet, verdict: Verdict, x: number, y: number, style: Style = {}): number {
  const { word, colour, draw } = looks[verdict]
  const size = style.size ?? 9
  const r = size * 0.32
  sheet.doc.fillColor(colour).strokeColor(colour).lineWidth(0.9)
  draw(sheet, x + r, y + size * 0.58, r)
  const words = { ...style, face: 'strong', colour } as const
  sheet.put(word, x + size, y, words)
  return x + size + sheet.width(word, words)
}

function disc({ doc }: Sheet, x: number, y: number, r: number): void {
  doc.circle(x, y, r).fill()
}

function halfDisc({ doc }: Sheet, x: number, y: number, r: number): void {
  doc.circle(x, y, r).stroke()
  doc
    .save()
    .rect(x - r, y - r, r, 2 * r)
    .clip()
  doc.circle(x, y, r).fill().restore()
}

function halfSquare({ doc }: Sheet, x: number, y: number, r: number): void {
  doc.rect(x - r, y - r, 2 * r, 2 * r).stroke()
  doc.rect(x - r, y - r, r, 2 * r).fill()
}

function crossedSquare({ doc }: Sheet, x: number, y: number, r: number): void {
  doc.rect(x - r, y - r, 2 * r, 2 * r).stroke()
  doc
    .moveTo(x - r, y - r)
    .lineTo(x + r, y + r)
    .moveTo(x + r, y - r)
    .lineTo(x - r, y + r)
    .stroke()
}

function pressedTriangle({ doc }: Sheet, x: number, y: number, r: number): void {
  doc
    .moveTo(x - r, y - r)
    .lineTo(x + r, y - r)
    .stroke()
  doc
    .moveTo(x, y - r * 0.6)
    .lineTo(x + r, y + r)
    .lineTo(x - r, y + r)
    .fill()
}

function stair({ doc }: Sheet, x: number, y: number, r: number): void {
  const third = (2 * r) / 3
  doc.moveTo(x - r, y + r)
  for (let i = 0; i < 3; i++) {
    doc
      .lineTo(x - r + i * third, y + r - (i + 1) * third)
      .lineTo(x - r + (i + 1) * third, y + r - (i + 1) * third)
  }
  doc.lineTo(x + r, y + r).fill()
}

function diamond({ doc }: Sheet, x: number, y: number, r: number): void {
  doc
    .moveTo(x, y - r)
    .lineTo(x + r, y)
    .lineTo(x, y + r)
    .lineTo(x - r, y)
    .closePath()
    .stroke()
  doc.circle(x, y, r * 0.3).fill()
}
