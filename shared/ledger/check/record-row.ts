import type { StoredRow } from '../../contract/ledger-entries.ts'
import type { RecordBody } from '../../contract/record.ts'

/**
 * Where a row of the table of records says something else than the record's own bytes.
 *
 * @param row as stored.
 * @param body of the leaf, parsed.
 * @returns the first field that differs, with both values; null when all agree. The codes of an override are those of the
 * record that it follows and stand in no bytes of its own; `attempt` counts other records and is not looked at here.
 * Throws nothing for a body of the format; whatever it throws for another means that it is no record.
 * Source: contract.md, Ledger.
 * @example rowDifference(row, body) // null
 */
export function rowDifference(row: StoredRow, body: RecordBody): string | null {
  const { result } = body
  const codes = (result?.format === 'ogee.codes/1' ? result.trim.codes : null) ?? {}
  const worst = result?.format === 'ogee.codes/1' ? result.trim.predicted?.worstLsb : result?.worst.errorLsb
  const isOwn = body.kind !== 'override'
  const pairs: [keyof StoredRow, unknown][] = [
    ['id', body.id],
    ['number', body.number],
    ['kind', body.kind],
    ['unit', body.unit],
    ['channel', body.channel],
    ['range', body.range],
    ['lot', body.lot],
    ['design', body.design],
    ['revision', body.revision],
    ['pass', body.pass],
    ['follows', body.follows],
    ['verdict', body.verdict],
    ['accepted', body.accepted],
    ['gainErrorPpm', result?.fit?.gainErrorPpm ?? null],
    ['offsetErrorV', result?.fit?.offsetErrorV ?? null],
    ['gainCode', isOwn ? (codes.gain ?? null) : row.gainCode],
    ['offsetCode', isOwn ? (codes.offset ?? null) : row.offsetCode],
    ['worstLsb', worst ?? null],
    ['by', body.by.name],
    ['byId', body.by.id],
    ['station', body.station],
    ['recordedAt', body.recordedAt],
  ]
  for (const [name, value] of pairs) {
    // The database knows one zero only.
    if (row[name] !== value && !(row[name] === 0 && value === 0)) return saying(name, row[name], value)
  }
  const sameTime =
    row.measuredAt === body.measuredAt ||
    (row.measuredAt !== null &&
      body.measuredAt !== null &&
      Date.parse(row.measuredAt) === Math.trunc(Date.parse(body.measuredAt)))
  return sameTime ? null : saying('measuredAt', row.measuredAt, body.measuredAt)
}

/**
 * Whether a row and a leaf agree, seen from the leaf's text without parsing it, which takes several times as long. Members
 * of a canonical text stand in one order, so each value is looked for between its neighbours.
 *
 * @param row as stored.
 * @param leaf canonical text of the whole leaf.
 * @returns true when all that `rowDifference` compares agrees; false when that is not to be seen so, which says nothing.
 * Throws nothing.
 * Source: RFC 8785 section 3.2.3 (order of members).
 * @example agreesAtSight(row, text) || rowDifference(row, JSON.parse(text).body) === null
 */
export function agreesAtSight(row: StoredRow, leaf: string): boolean {
  const { gainErrorPpm: gain, offsetErrorV: offset } = row
  if (gain === null || offset === null || !whoAgrees(row, leaf) || !resultAgrees(row, leaf)) return false
  const json = JSON.stringify
  return (
    leaf.startsWith(`{"at":${json(row.recordedAt)},"body":{"accepted":${row.accepted},"applied":`) &&
    leaf.endsWith(
      `,"revision":${row.revision},"station":${json(row.station)},"unit":${json(row.unit)},"verdict":${json(row.verdict)}},"kind":"record"}`,
    ) &&
    [
      `,"design":${json(row.design)},"designHash":"`,
      `,"follows":${json(row.follows)},"format":"ogee.record/1","id":${json(row.id)},"`,
      `,"kind":${json(row.kind)},"lot":${json(row.lot)},"measuredAt":${json(row.measuredAt)},"number":${row.number},"pass":${row.pass},"points":`,
      `,"range":${json(row.range)},"reason":`,
      `,"recordedAt":${json(row.recordedAt)},"result":{`,
      `,"gainErrorPpm":${gain},"instrument":`,
      `,"offsetErrorV":${offset},"residuals":`,
    ].every((part) => leaf.includes(part))
  )
}

/** A person's role stands in the leaf and in no row. */
function whoAgrees({ byId, by, channel }: StoredRow, leaf: string): boolean {
  const [id, name, at] = [byId, by, channel].map((text) => JSON.stringify(text))
  return (
    leaf.includes(`"by":{"id":${id},"kind":"token","name":${name}},"channel":${at},"claimed":`) ||
    (leaf.includes(`"by":{"id":${id},"kind":"person","name":${name},"role":"`) &&
      leaf.includes(`"},"channel":${at},"claimed":`))
  )
}

function resultAgrees({ kind, gainCode, offsetCode, worstLsb }: StoredRow, leaf: string): boolean {
  if (kind === 'trim') {
    return (
      leaf.includes(`"codes":{"gain":${gainCode},"offset":${offsetCode}},"effects":`) &&
      leaf.includes(`,"worstLsb":${worstLsb},"worstPpm":`)
    )
  }
  if (kind !== 'verify' || gainCode !== null || offsetCode !== null) return false
  const worst = leaf.lastIndexOf(',"worst":{"code":')
  return (
    worst > 0 && leaf.startsWith(`,"errorLsb":${worstLsb},"errorV":`, leaf.indexOf(',"errorLsb":', worst))
  )
}

const saying = (name: string, stored: unknown, hashed: unknown) =>
  `${name} is stored as ${String(stored)}, and was hashed as ${String(hashed)}`
