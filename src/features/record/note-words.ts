/** Sentences of the solver's reasons and notes. Verdicts are said by their own words and so are left out here. */
const words: Record<string, string> = {
  'assumed-neutral': 'Which codes were applied was not said; neutral was assumed.',
  'mixed-uncertainty': 'Not every point carries an uncertainty or several readings, so none was used.',
  'planned-noise': 'The uncertainty comes from the noise that the design states.',
  'verify-after-loading':
    'How well the effect is known may decide about the target: measure again after loading the codes.',
  'temperature-spread': 'The temperatures of the points lie more than 1 °C apart.',
  'tur-under-4': 'The test uncertainty ratio is under 4.',
  'guard-band-too-wide': 'The uncertainty is over the tolerance: such a point can never pass.',
  'no-gain-adjuster': 'The design has no gain adjuster to take the rest.',
  'no-offset-adjuster': 'The design has no offset adjuster to take the rest.',
}
const verdicts = new Set(['ok', 'out-of-reach', 'too-coarse', 'suspect'])

/** One sentence a note; a code that this page does not know is shown as it is. */
export function noteSentences(codes: readonly string[]): string[] {
  return [...new Set(codes)].filter((code) => !verdicts.has(code)).map((code) => words[code] ?? code)
}
