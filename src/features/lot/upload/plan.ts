import type { Design } from '../../../../shared/contract/design.ts'
import type { InputOf } from '../../../../shared/contract/endpoint.ts'
import { issueWords } from '../../../../shared/contract/issue-words.ts'
import { recordRequest } from '../../../../shared/contract/record.ts'
import type { postTrim } from '../../../../shared/contract/trims.ts'
import { OgeeError } from '../../../../shared/errors.ts'
import { canonicalBytes, type Json } from '../../../../shared/ledger/canonical.ts'
import type { CsvProblem, PointGroup } from '../../../../shared/points/group.ts'
import { parsePointsCsvAsync } from '../../../../shared/points/parse-csv.ts'
import { refuseLargeCsv } from '../../../../shared/points/split-csv.ts'

type Body = InputOf<typeof postTrim>['body']
export type UploadKind = 'trim' | 'verify'

/** A measurement that is ready to be sent, and where it stands in the file. */
export type Ready = {
  key: string
  body: Body
  unit: string
  channel: string
  range: string
  firstLine: number
  lastLine: number
}
export type UploadPlan = { name: string; text: string; ready: Ready[]; problems: CsvProblem[] }

const arithmetic = () => import('../../../../shared/quantity/arithmetic.ts')

/**
 * Reads a points CSV into what is sent for it. A bad row costs its own measurement; the good ones go on. Keys are made from
 * the measurement itself, as the command line makes them: the same file again doubles nothing.
 * @throws csv-too-large, invalid-document, csv-empty, csv-header, csv-quotes
 */
export async function planUpload(
  file: File,
  { design, key, lot, kind }: { design: Design; key: string; lot: string; kind: UploadKind },
): Promise<UploadPlan> {
  refuseLargeCsv(file.size)
  const text = await textOf(file)
  const { groups, problems } = await parsePointsCsvAsync(text, arithmetic, {
    channels: design.channels,
    ranges: design.ranges.map(({ id }) => id),
    unitRequired: true,
  })
  const plan: UploadPlan = { name: file.name, text, ready: [], problems: [...problems] }
  for (const group of groups) {
    const body = bodyOf(group, { design: key, lot, kind })
    const problem = problemOf(group, body, lot)
    if (problem) plan.problems.push(problem)
    else plan.ready.push({ ...placeOf(group, design), body, key: group.key ?? (await keyOf(body)) })
  }
  plan.problems.sort((a, b) => a.line - b.line)
  return plan
}

async function textOf(file: File): Promise<string> {
  try {
    return new TextDecoder('utf-8', { fatal: true }).decode(await file.arrayBuffer())
  } catch (cause) {
    throw new OgeeError('invalid-document', `${file.name} is not UTF-8 text. Save it as CSV in UTF-8.`, {
      cause,
    })
  }
}

function bodyOf(group: PointGroup, said: { design: string; lot: string; kind: UploadKind }): Body {
  const { kind, ...rest } = said
  return {
    ...(kind === 'trim' ? {} : { kind }),
    ...rest,
    unit: group.unit ?? '',
    ...(group.channel === undefined ? {} : { channel: group.channel }),
    ...(group.range === undefined ? {} : { range: group.range }),
    ...(group.applied === undefined ? {} : { applied: group.applied }),
    points: group.points as NonNullable<Body['points']>,
    ...(group.instrument === undefined ? {} : { conditions: { instrument: group.instrument } }),
  }
}

function problemOf(group: PointGroup, body: Body, lot: string): CsvProblem | null {
  const at = { line: group.firstLine, unit: group.unit, channel: group.channel, range: group.range }
  if (group.lot !== undefined && group.lot !== lot) {
    const message = `Line ${group.firstLine}, lot: the file says lot ${group.lot}; this is lot ${lot}.`
    return { ...at, code: 'lot-unknown', column: 'lot', message }
  }
  const parsed = recordRequest.safeParse(body, { error: issueWords })
  if (parsed.success) return null
  const issue = parsed.error.issues[0]
  const column = String(issue?.path[0] ?? '')
  return {
    ...at,
    code: 'csv-cell',
    column: column === '' ? null : column,
    message: `Line ${group.firstLine}, ${column}: ${issue?.message ?? 'it cannot be taken.'}`,
  }
}

const placeOf = ({ unit = '', channel, range, firstLine, lastLine }: PointGroup, design: Design) => ({
  unit,
  channel: channel ?? design.channels[0] ?? '',
  range: range ?? design.ranges[0]?.id ?? '',
  firstLine,
  lastLine,
})

/** As the command line's default key: `ogee1-` and the SHA-256 of the body in RFC 8785 form. */
async function keyOf(body: Body): Promise<string> {
  const hash = await crypto.subtle.digest('SHA-256', new Uint8Array(canonicalBytes(body as Json)))
  const text = btoa(String.fromCharCode(...new Uint8Array(hash)))
  return `ogee1-${text.replaceAll('+', '-').replaceAll('/', '_').replaceAll('=', '')}`
}
