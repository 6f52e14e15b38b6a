import PDFDocument from 'pdfkit'
import { type Face, partsOf } from './fonts.ts'

/** Light colours of the design tokens: paper is always light. */
export const ink = {
  text: '#211e1a',
  second: '#57514a',
  third: '#6d665c',
  hair: '#ddd6c8',
  rule: '#8a8274',
  tide: '#0a6c74',
  copper: '#a64b12',
  good: '#2f5510',
  caution: '#8a620a',
  bad: '#ad1f38',
  suspect: '#383f80',
} as const

const mm = 72 / 25.4
/** A4 with a filing margin of 22 mm, points. */
export const page = {
  width: 210 * mm,
  height: 297 * mm,
  left: 22 * mm,
  right: 210 * mm - 16 * mm,
  top: 14 * mm,
  /** Above the foot, which every page has. */
  bottom: 297 * mm - 22 * mm,
} as const

export type Style = { face?: Face; size?: number; colour?: string; align?: 'left' | 'right' }

const figures = { features: ['tnum'] as PDFKit.Mixins.OpenTypeFeatures[], lineBreak: false }
type Glyphs = { hasGlyphForCodePoint: (code: number) => boolean }
type Run = { font: string; text: string; isGap: boolean }

/** Between groups of digits; the typeface has no such space, so it is a step and leaves no mark in copied text. */
const thin = '\u2009'
const thinEm = 0.17

/** A document of A4 pages on which texts stand where they are put: no library decides about lines or pages. */
export class Sheet {
  readonly doc: PDFKit.PDFDocument
  /** Where the next part begins. */
  y: number = page.top
  readonly #glyphs = new Map<string, Glyphs>()
  readonly #widths = new Map<string, number>()

  constructor(info: { title: string; at: Date }) {
    this.doc = new PDFDocument({
      size: 'A4',
      margin: 0,
      bufferPages: true,
      font: partsOf('text')[0]!.file as unknown as string,
      lang: 'en',
      info: { Title: info.title, Producer: 'Ogee', Creator: 'Ogee', CreationDate: info.at, ModDate: info.at },
    })
    for (const face of ['text', 'strong', 'title', 'mono'] as const) {
      for (const { name, file } of partsOf(face)) this.doc.registerFont(name, file)
    }
  }

  /** Begins a new page when less than this is left of the old one; true when it did. */
  room(height: number): boolean {
    if (this.y + height <= page.bottom) return false
    this.doc.addPage()
    this.y = page.top
    return true
  }

  width(text: string, style: Style = {}): number {
    return this.#runs(text, style).reduce((sum, run) => sum + this.#runWidth(run, style), 0)
  }

  /** One line at a place; to the right end of it when aligned so. */
  put(text: string, x: number, y: number, style: Style = {}): void {
    let at = style.align === 'right' ? x - this.width(text, style) : x
    for (const run of this.#runs(text, style)) {
      const wide = this.#runWidth(run, style)
      if (!run.isGap) this.doc.fillColor(style.colour ?? ink.text).text(run.text, at, y, figures)
      at += wide
    }
  }

  /** Lines of a text within a width; words that are longer than a line are cut. */
  lines(text: string, width: number, style: Style = {}): string[] {
    const lines: string[] = []
    let line = ''
    let taken = 0
    for (const word of text.split(/(?<= )|(?<=\S{24})/)) {
      // Word by word: measuring the growing line again and again would be most of the work of a certificate.
      const wide = this.width(word, style)
      const seen = word.endsWith(' ') ? this.width(word.trimEnd(), style) : wide
      if (line !== '' && taken + seen > width) {
        lines.push(line.trimEnd())
        line = ''
        taken = 0
      }
      line += word
      taken += wide
    }
    return [...lines, line.trimEnd()]
  }

  /** A paragraph at the left edge or at `x`; moves on below it. */
  paragraph(text: string, style: Style = {}, x: number = page.left, width: number = page.right - x): void {
    const height = (style.size ?? 9) * 1.35
    for (const line of this.lines(text, width, style)) {
      this.room(height)
      this.put(line, x, this.y, style)
      this.y += height
    }
  }

  line(x1: number, x2: number, y: number, colour: string = ink.rule, width = 0.6): void {
    this.doc.moveTo(x1, y).lineTo(x2, y).lineWidth(width).strokeColor(colour).stroke()
  }

  /** A part of the page under its name. */
  section(title: string, least: number): void {
    this.y += 6
    if (!this.room(least + 20)) this.line(page.left, page.right, this.y)
    this.put(title, page.left, this.y + 4, { face: 'strong' })
    this.y += 19
  }

  #runWidth({ font, text, isGap }: Run, { size = 9 }: Style): number {
    if (isGap) return thinEm * size
    this.doc.font(font).fontSize(size)
    const key = `${font} ${size} ${text}`
    const known = this.#widths.get(key)
    if (known !== undefined) return known
    const wide = this.doc.widthOfString(text, figures)
    this.#widths.set(key, wide)
    return wide
  }

  /** Which part of the face sets which characters; what none has is told by its code point and not left out. */
  #runs(text: string, { face = 'text' }: Style): Run[] {
    const parts = partsOf(face).map(({ name }) => name)
    const runs: Run[] = []
    for (const character of text) {
      if (character === thin) {
        runs.push({ font: '', text: '', isGap: true })
        continue
      }
      const found = parts.find((name) => this.#has(name, character))
      const font = found ?? parts[0]!
      const shown = found ? character : `[U+${character.codePointAt(0)!.toString(16).toUpperCase()}]`
      const last = runs.at(-1)
      if (last?.font === font) last.text += shown
      else runs.push({ font, text: shown, isGap: false })
    }
    return runs
  }

  #has(name: string, character: string): boolean {
    let glyphs = this.#glyphs.get(name)
    if (!glyphs) {
      this.doc.font(name)
      // Not in the library's types: the font that was just chosen.
      glyphs = (this.doc as unknown as { _font: { font: Glyphs } })._font.font
      this.#glyphs.set(name, glyphs)
    }
    return glyphs.hasGlyphForCodePoint(character.codePointAt(0)!)
  }
}
