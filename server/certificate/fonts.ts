import { readFileSync } from 'node:fs'
import { createRequire } from 'node:module'
import { openTypeOf } from './woff.ts'

/** The shipped typefaces, in parts by script: each text is set from the first part that has its characters. */
const scripts = ['latin', 'latin-ext', 'greek', 'cyrillic'] as const
const faces = {
  text: { family: 'sans', weight: 400, scripts },
  strong: { family: 'sans', weight: 600, scripts },
  title: { family: 'sans', weight: 500, scripts },
  mono: { family: 'mono', weight: 400, scripts: ['latin'] },
} as const
export type Face = keyof typeof faces

const require = createRequire(import.meta.url)
const loaded = new Map<string, Buffer>()

export type FontPart = { name: string; file: Buffer }

/** Parts of a face, read once; pdfkit embeds only what is used of them. */
export function partsOf(face: Face): FontPart[] {
  const { family, weight, scripts } = faces[face]
  return scripts.map((script) => {
    const name = `fira-${family}-${script}-${weight}`
    const file =
      loaded.get(name) ??
      openTypeOf(readFileSync(require.resolve(`@fontsource/fira-${family}/files/${name}-normal.woff`)))
    loaded.set(name, file)
    return { name, file }
  })
}
