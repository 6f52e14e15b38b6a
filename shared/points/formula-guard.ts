/** What a spreadsheet would run as a formula, behind any number of guards that the text itself begins with. */
const live = /^'*[=+\-@\t\r\0]/

/**
 * A text as it may stand in a CSV that a spreadsheet opens: a leading quote keeps it from being run as a formula. Numbers
 * are no texts and are never guarded.
 * Source: ASVS 5.0.0 V1.2.10.
 * @example guarded('=1+1') // "'=1+1"
 */
export function guarded(text: string): string {
  return live.test(text) ? `'${text}` : text
}

/**
 * The text that was guarded; any other text as it is. The inverse of `guarded` for every text.
 * @example unguarded("'=1+1") // '=1+1'
 */
export function unguarded(text: string): string {
  return text.startsWith("'") && live.test(text) ? text.slice(1) : text
}
