import { type FormDoc, kOf, type Line, type LineField, lineField, type Which } from './form-doc.ts'
import { type Arithmetic, newReader, type Reader, readNumber, stated } from './reader.ts'

type ReadLine = { line: object; problems: ReadonlyMap<string, string>; isPending: boolean }

/**
 * The budget may have 10,000 lines and a key changes one: each line is read once as long as it is the same object. A new
 * result of arithmetic is a new function and a new memory.
 */
const memories = new WeakMap<Arithmetic, Record<Which, WeakMap<Line, ReadLine>>>()

export function readLines(reader: Reader, doc: FormDoc, which: Which): object[] {
  let memory = memories.get(reader.arithmetic)
  if (memory === undefined) {
    memory = { gain: new WeakMap(), offset: new WeakMap() }
    memories.set(reader.arithmetic, memory)
  }
  return doc.lines[which].map((line) => {
    let read = memory[which].get(line)
    if (read === undefined) {
      read = readLine(reader.arithmetic, which, line)
      memory[which].set(line, read)
    }
    for (const [field, why] of read.problems) reader.problems.set(field, why)
    if (read.isPending) reader.isPending = true
    return read.line
  })
}

function readLine(arithmetic: Arithmetic, which: Which, line: Line): ReadLine {
  const own = newReader(arithmetic)
  const place = (name: LineField | 'k') => lineField(which, line.id, name)
  const unit = which === 'gain' ? 'ppm' : 'V'
  if (line.name.trim() === '') own.problems.set(place('name'), 'Line is missing: name what it limits.')
  const limit = readNumber(own, place('limit'), line.limit, { label: 'Limit', unit, rule: 'not-negative' })
  const nominal = readNumber(own, place('nominal'), line.nominal, { label: 'Bias', unit, optional: true })
  const typedK = kOf(line.shape)
  const k =
    typedK === undefined
      ? undefined
      : readNumber(own, place('k'), typedK, { label: 'k', unit: '', rule: 'positive' })
  const shared = { name: line.name.trim(), distribution: line.shape.split(' ')[0], k }
  const read =
    which === 'gain'
      ? {
          ...shared,
          when: line.when,
          limitPpm: limit,
          nominalPpm: nominal,
          pivotV: readNumber(own, place('pivot'), line.pivot, { label: 'Pivot', unit: 'V', optional: true }),
        }
      : { ...shared, when: line.when, limitV: limit, nominalV: nominal }
  return { line: stated(read), problems: own.problems, isPending: own.isPending }
}
