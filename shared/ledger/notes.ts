/**
 * The signed notes in a text, one behind the other, as a server appends its checkpoints to a file.
 *
 * @param text of a file; lines between notes are passed over.
 * @returns each checkpoint whole, in order of appearance. Nothing is checked.
 * Throws nothing.
 * Source: C2SP tlog-checkpoint and signed-note: text, an empty line, lines of signatures.
 * @example notesIn('nonsense') // []
 */
export function notesIn(text: string): string[] {
  return [
    ...text.matchAll(
      /^[^\n]+\n(?:0|[1-9]\d{0,15})\n[A-Za-z0-9+/]{43}=\n(?:[^\n]+\n)*\n(?:\u2014 \S+ \S+\n)+/gm,
    ),
  ].map(([note]) => note)
}
