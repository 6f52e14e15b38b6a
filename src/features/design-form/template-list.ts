/**
 * Starting points of our own making, as they are offered: usual circuits with round values; resolution and range are left
 * to be typed. What is in them loads with a new design alone.
 */
export const templates = [
  {
    name: 'unipolar',
    word: 'Unipolar',
    says: 'From 0 V up. The gain adjuster pulls on the reference, the offset adjuster sums at the output.',
  },
  {
    name: 'bipolar',
    word: 'Bipolar',
    says: 'About 0 V, offset read at 0 V. Both adjusters, converter in two\u2019s complement.',
  },
  { name: 'gain-only', word: 'Gain only', says: 'One adjuster, for channels whose offset needs no trim.' },
] as const
export type TemplateName = (typeof templates)[number]['name']
export const isTemplate = (name: string | null): name is TemplateName =>
  templates.some((one) => one.name === name)
