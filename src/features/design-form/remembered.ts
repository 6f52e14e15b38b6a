import { type Arithmetic, newReader, type Reader } from './reader.ts'

type Part = { texts: readonly unknown[]; result: unknown; reader: Reader }

/** A new result of arithmetic is a new function and a new memory. */
const memories = new WeakMap<Arithmetic, Map<string, Part>>()

/** Reads a part of the form again only when one of its texts has changed: a key changes one part. */
export function remembered<T>(
  reader: Reader,
  name: string,
  texts: readonly unknown[],
  read: (own: Reader) => T,
): T {
  let memory = memories.get(reader.arithmetic)
  if (memory === undefined) {
    memory = new Map()
    memories.set(reader.arithmetic, memory)
  }
  let part = memory.get(name)
  if (part === undefined || !sameTexts(part.texts, texts)) {
    const own = newReader(reader.arithmetic)
    part = { texts, result: read(own), reader: own }
    memory.set(name, part)
  }
  for (const [field, why] of part.reader.problems) reader.problems.set(field, why)
  if (part.reader.isPending) reader.isPending = true
  return part.result as T
}

const sameTexts = (a: readonly unknown[], b: readonly unknown[]) =>
  a.length === b.length && a.every((text, i) => text === b[i])

/** Names and texts of all fields whose name begins so. */
export function textsUnder(values: Readonly<Record<string, string>>, prefix: string): string[] {
  const found: string[] = []
  for (const name of Object.keys(values)) if (name.startsWith(prefix)) found.push(name, values[name]!)
  return found
}
