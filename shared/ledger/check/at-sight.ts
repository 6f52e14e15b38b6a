/** Gives bytes as text, one character for each byte: what two such texts have in common, the bytes have in common. */
export type BytesAsText = (bytes: Uint8Array) => string

/** What a line says of an entry whose row says the same as its leaf. Whether leaf and hash fit is not looked at. */
export type Sighted = { index: number; nodes: string; hash: string; record: string; leaf: Uint8Array }

/** How a line gives its values, in this order; a row's last members take no part in the comparison. */
const marks = [
  '{"leafBytes":',
  ',"index":',
  ',"nodes":"',
  '","hash":"',
  '","row":{"id":',
  ',"number":',
  ',"kind":',
  ',"unit":',
  ',"channel":',
  ',"range":',
  ',"lot":',
  ',"design":',
  ',"revision":',
  ',"pass":',
  ',"follows":',
  ',"verdict":',
  ',"accepted":',
  ',"gainErrorPpm":',
  ',"offsetErrorV":',
  ',"gainCode":',
  ',"offsetCode":',
  ',"worstLsb":',
  ',"attempt":',
  ',"by":',
  ',"byId":',
  ',"station":',
  ',"measuredAt":',
  ',"recordedAt":',
  ',"notices":',
]

/**
 * Reads a line of `GET /ledger/entries` whose row and leaf agree at sight: value by value as they are written, without
 * parsing either, which takes several times as long. Members of a canonical text stand in one order, so each value is
 * looked for behind the one before it and between its neighbours.
 *
 * @param line bytes without the line end.
 * @param asText one character for each byte.
 * @returns what the line says; null when it is not to be seen that all agrees which `rowDifference` compares. That says
 * nothing: such a line is to be parsed.
 * Throws nothing.
 * Source: RFC 8785 section 3.2.3 (order of members).
 * @example readAtSight(line, asText) ?? readEntry(line)
 */
export function readAtSight(line: Uint8Array, asText: BytesAsText): Sighted | null {
  const text = asText(line)
  const values = valuesOf(text)
  if (values === null) return null
  const [leafBytes, index, nodes, hash, ...row] = values
  const from = line.length - 1 - Number(leafBytes)
  // A character is a byte, so the leaf's text begins where its bytes do; and there the row must have ended.
  if (!text.endsWith('"}},"leaf":', from) || !agrees(row, text, from)) return null
  return {
    index: Number(index),
    nodes: nodes!,
    hash: hash!,
    record: row[0]!.slice(1, -1),
    leaf: line.subarray(from, line.length - 1),
  }
}

/** What stands behind each mark, as written. */
function valuesOf(text: string): string[] | null {
  if (!text.startsWith(marks[0]!)) return null
  const values: string[] = []
  let at = marks[0]!.length
  for (let i = 1; i < marks.length; i++) {
    const end = text.indexOf(marks[i]!, at)
    if (end < 0) return null
    values.push(text.slice(at, end))
    at = end + marks[i]!.length
  }
  // A quotation mark within a text has one before it; without any, what stands between two marks is one value.
  const escaped = text.indexOf('\\')
  return escaped < 0 || escaped > at ? values : null
}

/** A place in a text that only goes on. */
class Cursor {
  readonly text: string
  at: number
  constructor(text: string, at: number) {
    this.text = text
    this.at = at
  }
  /** Goes behind the next place where this stands. */
  passes(part: string): boolean {
    const found = this.text.indexOf(part, this.at)
    this.at = found + part.length
    return found >= 0
  }
  isAt(part: string): boolean {
    return this.text.startsWith(part, this.at)
  }
}

function agrees(row: readonly string[], text: string, from: number): boolean {
  const [id, number, kind, unit, channel, range, lot, design, revision, pass, follows, verdict] = row
  const [accepted, gainErrorPpm, offsetErrorV] = row.slice(12)
  const [by, byId, station, measuredAt, recordedAt] = row.slice(19)
  const leaf = new Cursor(text, from)
  return (
    gainErrorPpm !== 'null' &&
    offsetErrorV !== 'null' &&
    leaf.isAt(`{"at":${recordedAt},"body":{"accepted":${accepted},"applied":`) &&
    // A person's role stands in the leaf and in no row.
    leaf.passes('"by":{"id":') &&
    (leaf.isAt(`${byId},"kind":"token","name":${by}},"channel":${channel},"claimed":`) ||
      (leaf.isAt(`${byId},"kind":"person","name":${by},"role":"`) &&
        leaf.passes(`"},"channel":${channel},"claimed":`))) &&
    leaf.passes(`,"design":${design},"designHash":"`) &&
    leaf.passes(`,"follows":${follows},"format":"ogee.record/1","id":${id}`) &&
    leaf.passes(
      `,"kind":${kind},"lot":${lot},"measuredAt":${measuredAt},"number":${number},"pass":${pass},"points":`,
    ) &&
    leaf.passes(`,"range":${range},"reason":`) &&
    leaf.passes(`,"recordedAt":${recordedAt},"result":{`) &&
    leaf.passes(`,"gainErrorPpm":${gainErrorPpm},"instrument":`) &&
    leaf.passes(`,"offsetErrorV":${offsetErrorV},"residuals":`) &&
    (kind === '"trim"' ? trimAgrees(row, leaf) : kind === '"verify"' && verifyAgrees(row, leaf)) &&
    text.endsWith(
      `,"revision":${revision},"station":${station},"unit":${unit},"verdict":${verdict}},"kind":"record"}}`,
    )
  )
}

function trimAgrees(row: readonly string[], leaf: Cursor): boolean {
  const [gainCode, offsetCode, worstLsb] = row.slice(15)
  const codes: string[] = []
  if (gainCode !== 'null') codes.push(`"gain":${gainCode}`)
  if (offsetCode !== 'null') codes.push(`"offset":${offsetCode}`)
  return (
    leaf.passes(`"codes":${codes.length === 0 ? 'null' : `{${codes.join()}}`},"effects":`) &&
    leaf.passes(worstLsb === 'null' ? ',"predicted":null,' : `,"worstLsb":${worstLsb},"worstPpm":`)
  )
}

function verifyAgrees(row: readonly string[], { text, at }: Cursor): boolean {
  const [gainCode, offsetCode, worstLsb] = row.slice(15)
  const worst = text.lastIndexOf(',"worst":{"code":')
  return (
    gainCode === 'null' &&
    offsetCode === 'null' &&
    worst > at &&
    text.startsWith(`,"errorLsb":${worstLsb},"errorV":`, text.indexOf(',"errorLsb":', worst))
  )
}
