import type { Context, Format } from './command.ts'
import { wantsColour } from './io.ts'
import { type Cell, csv } from './table.ts'

/** How one result looks in each format. A table is for people; the others are for programs and stay as they are. */
export type Rendering = {
  json: unknown
  table: (colour: boolean) => string
  csv?: { heads: readonly string[]; rows: readonly (readonly Cell[])[] }
  /** The lines of ndjson; the whole document as one line when left out. */
  lines?: readonly unknown[]
}

export function render(rendering: Rendering, format: Format, colour: boolean): string {
  switch (format) {
    case 'table':
      return rendering.table(colour)
    case 'json':
      return `${JSON.stringify(rendering.json, null, 2)}\n`
    case 'ndjson':
      return (rendering.lines ?? [rendering.json]).map((line) => `${JSON.stringify(line)}\n`).join('')
    case 'csv':
      return csv(rendering.csv?.heads ?? [], rendering.csv?.rows ?? [])
  }
}

export async function print(rendering: Rendering, { io, format }: Context): Promise<void> {
  await io.write(render(rendering, format, wantsColour(io)))
}

const marks: Readonly<Record<string, { mark: string; colour: number }>> = {
  ok: { mark: '✓', colour: 32 },
  pass: { mark: '✓', colour: 32 },
  'too-coarse': { mark: '△', colour: 33 },
  'conditional-pass': { mark: '△', colour: 33 },
  'conditional-fail': { mark: '△', colour: 33 },
  suspect: { mark: '?', colour: 33 },
  'out-of-reach': { mark: '✕', colour: 31 },
  fail: { mark: '✕', colour: 31 },
}

/** A verdict is shape and word; colour comes on top where it is welcome. */
export function verdictText(verdict: string, colour: boolean): string {
  const { mark, colour: number } = marks[verdict] ?? { mark: '·', colour: 39 }
  const words = `${mark} ${verdict.replaceAll('-', ' ')}`
  return colour ? `\u001b[${number}m${words}\u001b[39m` : words
}

export const caution = 'Loading codes moves a live output. Make safe what it drives first.'

/** Shown to people with every set of codes; programs have their own procedures. */
export function sayCaution({ io, format }: Context): void {
  if (format === 'table' || io.stderrIsTerminal) io.say(caution)
}
