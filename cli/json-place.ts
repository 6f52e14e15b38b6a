/** Where a text stops being JSON. JSON.parse itself names the place for some mistakes only. */

const space = /[ \t\n\r]*/y
const scalar =
  /"(?:[ !#-[\]-\uffff]|\\(?:["\\/bfnrt]|u[0-9a-fA-F]{4}))*"|-?(?:0|[1-9]\d*)(?:\.\d+)?(?:[eE][+-]?\d+)?|true|false|null/y
const key = /"(?:[ !#-[\]-\uffff]|\\(?:["\\/bfnrt]|u[0-9a-fA-F]{4}))*"/y

/** Offset of the first character that cannot stand where it does; the length of the text when its end is missing. */
export function jsonStopsAt(text: string): number {
  const open: ('{' | '[')[] = []
  let at = 0
  let wants: 'value' | 'first-value' | 'key' | 'first-key' | 'after' = 'value'
  const take = (pattern: RegExp): boolean => {
    pattern.lastIndex = at
    if (!pattern.test(text)) return false
    at = pattern.lastIndex
    return true
  }
  for (;;) {
    take(space)
    const char = text[at]
    if (wants === 'after' && open.length === 0) return at
    if ((wants === 'first-value' && char === ']') || (wants === 'first-key' && char === '}')) {
      open.pop()
      at += 1
      wants = 'after'
    } else if (wants === 'after') {
      const inside = open.at(-1)
      if (char === (inside === '{' ? '}' : ']')) open.pop()
      else if (char === ',') wants = inside === '{' ? 'key' : 'value'
      else return at
      at += 1
    } else if (wants === 'key' || wants === 'first-key') {
      if (!take(key)) return at
      take(space)
      if (text[at] !== ':') return at
      at += 1
      wants = 'value'
    } else if (char === '{' || char === '[') {
      open.push(char)
      at += 1
      wants = char === '{' ? 'first-key' : 'first-value'
    } else if (take(scalar)) wants = 'after'
    else return at
  }
}

/** The same as words: `line 3, column 7`. */
export function placeInJson(text: string): string {
  const at = jsonStopsAt(text)
  if (at >= text.length) return 'its end: something is cut off'
  const before = text.slice(0, at).split('\n')
  return `line ${before.length}, column ${(before.at(-1) ?? '').length + 1}`
}
