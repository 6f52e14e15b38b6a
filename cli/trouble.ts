import { type ErrorCode, errorTable, OgeeError } from '../shared/errors.ts'
import type { Format } from './command.ts'
import type { Io } from './io.ts'

/** Turns whatever was thrown into trouble of the table: its sentence for people, its problem document for programs. */

/** An unknown error is a defect. Its own words may hold anything, a token included, so they are not repeated. */
export function toTrouble(thrown: unknown): OgeeError {
  if (thrown instanceof OgeeError) return thrown
  if (thrown instanceof Error && thrown.name === 'OgeeError') return adopted(thrown)
  return new OgeeError(
    'defect',
    'Something is broken in this program. Run it again with OGEE_LOG=debug and report what it prints.',
    { cause: thrown },
  )
}

/** An OgeeError of the arithmetic part, which has its own copy of the class. */
function adopted(thrown: Error): OgeeError {
  const { code, facts, errors } = thrown as OgeeError
  return code in errorTable
    ? new OgeeError(code, thrown.message, { facts, errors })
    : new OgeeError('defect', thrown.message)
}

/** The RFC 9457 document of a trouble, with the exit code. */
export function problemDocument(trouble: OgeeError): Record<string, unknown> {
  const { code, message, errors, facts } = trouble
  return {
    type: `/problems/${code}`,
    title: errorTable[code].title,
    status: trouble.status,
    detail: message,
    code,
    ...(errors.length > 0 ? { errors } : {}),
    ...(Object.keys(facts).length > 0 ? { facts } : {}),
    exit: trouble.exit,
  }
}

const nextSteps: Partial<Record<ErrorCode, string>> = {
  'token-invalid': 'Ask an administrator for a new token, and set OGEE_TOKEN or the token file.',
  'insufficient-scope':
    'Ask an administrator for a token with that scope. `ogee whoami` shows the scopes of yours.',
  'server-unreachable':
    'Check OGEE_URL and the network, then run the same command again: nothing is doubled.',
  'database-unavailable': 'Run the same command again: nothing is doubled.',
  'not-ready': 'Run the same command again: nothing is doubled.',
  'answer-cut': 'Run the same command again: nothing is doubled.',
  'too-many-requests': 'Run the same command again later: nothing is doubled.',
}

/** Says what went wrong on standard error; with json or ndjson the last line is the problem document. */
export function sayTrouble(trouble: OgeeError, io: Pick<Io, 'say' | 'env'>, format: Format): void {
  const say = (line: string) => io.say(withoutTokens(line))
  say(`ogee: ${trouble.message}`)
  for (const { path, message } of trouble.errors) say(`  ${path}: ${message}`)
  const next = nextSteps[trouble.code]
  if (next) say(`  ${next}`)
  if (trouble.code === 'defect' && io.env.OGEE_LOG === 'debug') say(stackOf(trouble))
  if (isForPrograms(format)) say(JSON.stringify(problemDocument(trouble)))
}

/** Somebody may have typed a token where none belongs, and the words of the trouble repeat what was typed. */
const withoutTokens = (line: string) => line.replaceAll(/ogee_[0-9A-Za-z]{8}_[0-9A-Za-z]+/g, 'ogee_…')

const stackOf = ({ cause, stack }: OgeeError) => (cause instanceof Error ? cause.stack : stack) ?? ''

const isForPrograms = (format: Format) => format === 'json' || format === 'ndjson'

/** The format asked for, read loosely: trouble can come before the command line has been understood. */
export function formatAskedFor(argv: readonly string[], stdoutIsTerminal: boolean): Format {
  const at = argv.findLastIndex((word) => word === '--format' || word.startsWith('--format='))
  const word = at < 0 ? undefined : argv[at]
  const value = word === '--format' ? argv[at + 1] : word?.slice('--format='.length)
  if (value === 'table' || value === 'json' || value === 'csv' || value === 'ndjson') return value
  return stdoutIsTerminal ? 'table' : 'json'
}

/** What stands on standard error after Ctrl-C. */
export function interruption(argv: readonly string[], io: Pick<Io, 'stdoutIsTerminal'>): string {
  const trouble = new OgeeError('interrupted', 'Interrupted. Run the same command again: nothing is doubled.')
  const lines: string[] = []
  sayTrouble(trouble, { say: (line) => lines.push(line), env: {} }, formatAskedFor(argv, io.stdoutIsTerminal))
  return `\n${lines.join('\n')}\n`.slice(io.stdoutIsTerminal ? 0 : 1)
}
