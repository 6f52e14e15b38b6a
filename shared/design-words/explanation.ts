/** How one number of an answer came about. Texts are for screens. */
export type ExplanationInput = {
  label: string
  text: string
  /** JSON pointer of the field in the design that a person would change; null for what follows from other numbers. */
  path: string | null
}
export type Explanation = { formula: string; inputs: ExplanationInput[]; source: string }

export const own = 'Definition of this page: solver, section 6'
export const gum = 'JCGM 100:2008, 4.3 and 5.1'
export const handbook = 'W. Kester (ed.), Data Conversion Handbook (2005), chapter 2'

export const input = (label: string, text: string, path: string | null = null): ExplanationInput => ({
  label,
  text,
  path,
})
