/**
 * The one table of everything that can be refused or fail, and the class that carries it.
 *
 * Three families (see DEVELOPERS.md): refusals (the data or the caller cannot have what was asked), outages
 * (a dependency failed, try again) and bugs (a broken invariant). Code branches on `code`, never on wording.
 * `exit` is the command line's exit code (sysexits.h); verdicts have their own codes in `shared/contract/exit.ts`.
 */
type Entry = { status: number; title: string; retry: boolean; exit: number }

const badInput = (title: string, status = 422): Entry => ({ status, title, retry: false, exit: 65 })

export const errorTable = {
  // Converter and points (solver)
  'range-reversed': badInput('The range is reversed'),
  'bits-out-of-bounds': badInput('The resolution is out of bounds'),
  'outside-range': badInput('The voltage lies outside the range'),
  'code-out-of-range': badInput('The code does not exist in this converter'),
  'code-target-disagree': badInput('Code, word and target do not agree'),
  'too-few-codes': badInput('Two different codes are the least that gives a line'),
  'not-finite': badInput('A number is not finite'),
  'uncertainty-not-positive': badInput('A stated uncertainty must be over zero'),
  'implausible-uncertainty': badInput('A stated uncertainty is far from what can be measured'),
  'range-out-of-bounds': badInput('The range is too small or too large'),
  'implausible-point': badInput('A measured value is far from ideal'),
  'point-incomplete': badInput('A point needs a code and a measured value'),
  'too-many-points': badInput('There are too many points'),
  'uncertainty-unknown': badInput('The guarded rule needs an uncertainty'),
  'tolerance-missing': badInput('The design states no tolerance'),
  // Adjusters and networks (solver)
  'resistance-not-positive': badInput('A resistance must be over zero'),
  'effect-zero': badInput('The adjuster moves nothing'),
  'tolerance-out-of-bounds': badInput('The effect tolerance must be at least 0 and under 1'),
  'reference-zero': badInput('The reference voltage is zero'),
  'source-span-zero': badInput('The auxiliary DAC spans nothing'),
  'adjusters-not-independent': badInput('The two adjusters do the same thing'),
  'adjuster-without-effect': badInput('The adjuster has no effect where it must null'),
  'no-adjuster': badInput('The design has no adjuster'),
  'applied-unknown': badInput('The applied codes do not fit the design'),
  // Sizing, networks, yield (solver)
  'budget-empty': badInput('The error budget has nothing in it'),
  'budget-line': badInput('A line of the error budget cannot be taken'),
  'too-few-units': badInput('Two units are the least that show a spread'),
  'network-request': badInput('The network cannot be asked for that'),
  // Quantities, CSV, documents
  'quantity-unreadable': badInput('The quantity cannot be read'),
  'quantity-wrong-kind': badInput('The unit is of the wrong kind'),
  'arithmetic-unavailable': badInput('Arithmetic in a cell needs arithmetic.mjs beside ogee.mjs'),
  'csv-empty': badInput('The CSV has no points'),
  'csv-header': badInput('The header row of the CSV is not right'),
  'csv-quotes': badInput('A quote in the CSV is not closed or stands in the wrong place'),
  'csv-cell': badInput('A cell of the CSV cannot be taken'),
  'csv-too-large': badInput('The CSV is too large for this page', 413),
  'duplicate-unit': badInput('The unit stands twice in this file'),
  'invalid-document': badInput('The document does not match its format'),
  'unknown-format': badInput('This version does not read that format'),
  // Requests
  'invalid-request': badInput('The request does not match its schema'),
  'malformed-json': badInput('The body is not JSON', 400),
  'unsupported-media-type': badInput('The body must be JSON', 415),
  'body-too-large': badInput('The body is too large', 413),
  'header-too-large': badInput('The request headers are too large', 431),
  'bad-framing': badInput('The request is not well-formed HTTP', 400),
  'method-not-allowed': badInput('That method is not served here', 405),
  'not-found': badInput('There is nothing here, or it is not open to you', 404),
  'idempotency-key-missing': badInput('Idempotency-Key is missing', 400),
  'idempotency-key-reused': badInput('The idempotency key was used with another body'),
  'idempotency-in-flight': {
    status: 409,
    title: 'The same request is still being worked on',
    retry: true,
    exit: 75,
  },
  'precondition-failed': badInput('It was changed after you opened it', 412),
  'precondition-required': badInput('If-Match is missing', 428),
  'already-exists': badInput('It exists already', 409),
  'too-many-requests': { status: 429, title: 'Too many requests', retry: true, exit: 75 },
  // Trims
  'unit-serial': badInput('The serial is not usable'),
  'channel-required': badInput('The design has several channels: name one'),
  'channel-unknown': badInput('The design has no such channel'),
  'range-required': badInput('The design has several ranges: name one'),
  'range-unknown': badInput('The design has no such range'),
  'lot-unknown': badInput('There is no such lot of this design'),
  'lot-closed': badInput('The lot takes no further record'),
  'lot-state': badInput('The lot is in another state', 409),
  'lot-undecided': badInput('Units of the lot need a decision'),
  'lot-unit-unknown': badInput('The lot has no such unit'),
  'lot-expected-full': badInput('The lot expects as many units as it can'),
  'applied-required': badInput('Say which codes were applied while measuring'),
  'follows-unknown': badInput('There is no such record of this unit, channel and range to follow'),
  'reason-required': badInput('A reason of at least ten characters is needed'),
  'override-needs-a-person': { status: 403, title: 'An override needs a person', retry: false, exit: 77 },
  'override-not-suspect': badInput('Only a suspect record can be overridden'),
  'already-withdrawn': badInput('The record was withdrawn before', 409),
  'revision-not-released': badInput('The revision is not released'),
  'revision-withdrawn': badInput('The revision was withdrawn'),
  'revision-state': badInput('The revision is in another state', 409),
  'author-cannot-release': { status: 403, title: 'The author does not release', retry: false, exit: 77 },
  'finding-closed': badInput('The finding is closed', 409),
  'instrument-unknown': badInput('There is no such instrument'),
  'instrument-retired': badInput('The instrument is retired', 409),
  'instrument-overdue': badInput('The calibration of the instrument is overdue'),
  'kind-not-served': badInput('This version does not record that kind yet'),
  // Identity
  'sign-in-required': { status: 401, title: 'Sign in first', retry: false, exit: 77 },
  'wrong-password': { status: 401, title: 'E-mail or password is wrong', retry: false, exit: 77 },
  'token-invalid': { status: 401, title: 'The token is wrong, expired or revoked', retry: false, exit: 77 },
  'token-malformed': { status: 400, title: 'The Authorization header is malformed', retry: false, exit: 65 },
  'insufficient-scope': { status: 403, title: 'The token has too little scope', retry: false, exit: 77 },
  forbidden: { status: 403, title: 'That is not open to your role', retry: false, exit: 77 },
  'cross-site-refused': {
    status: 403,
    title: 'The request did not come from this site',
    retry: false,
    exit: 77,
  },
  'password-too-weak': badInput('The password is not accepted'),
  'setup-closed': { status: 403, title: 'Set-up is closed', retry: false, exit: 77 },
  'token-limit': badInput('The station has two live tokens already', 409),
  'station-retired': badInput('The station is retired', 409),
  // Ledger
  'ledger-key-differs': {
    status: 500,
    title: 'The ledger key differs from the one in force',
    retry: false,
    exit: 78,
  },
  'not-in-ledger-yet': { status: 409, title: 'Not yet in the ledger', retry: true, exit: 75 },
  // Outages
  'database-unavailable': { status: 503, title: 'The database does not answer', retry: true, exit: 75 },
  'not-ready': { status: 503, title: 'The server is not ready', retry: true, exit: 75 },
  'answer-cut': { status: 503, title: 'The answer was cut on its way', retry: true, exit: 75 },
  'server-unreachable': { status: 503, title: 'The server does not answer', retry: true, exit: 69 },
  // Command line
  usage: { status: 400, title: 'The command line is not right', retry: false, exit: 64 },
  'input-missing': { status: 404, title: 'The input file is missing', retry: false, exit: 66 },
  'read-failed': { status: 500, title: 'Reading or writing failed', retry: false, exit: 74 },
  'cannot-create': { status: 500, title: 'The file cannot be created', retry: false, exit: 73 },
  configuration: { status: 500, title: 'The configuration is not right', retry: false, exit: 78 },
  interrupted: { status: 499, title: 'Interrupted', retry: false, exit: 130 },
  // Bugs
  defect: { status: 500, title: 'Something is broken on our side', retry: false, exit: 70 },
} as const satisfies Record<string, Entry>

export type ErrorCode = keyof typeof errorTable

/** One bad field: `path` is a JSON pointer (`/ranges/0/lowV`) or a CSV place (`line 3, measured`). */
export type FieldError = { path: string; message: string }

export type ErrorFacts = Readonly<Record<string, string | number | boolean | null>>

/**
 * A refusal, outage or bug: a code of the table, one public sentence that names the place and the remedy, structured
 * facts for programs, the bad fields, and a cause that never leaves the process.
 */
export class OgeeError extends Error {
  readonly code: ErrorCode
  readonly facts: ErrorFacts
  readonly errors: readonly FieldError[]

  constructor(
    code: ErrorCode,
    detail: string,
    more: { facts?: ErrorFacts; errors?: readonly FieldError[]; cause?: unknown } = {},
  ) {
    super(detail, more.cause === undefined ? undefined : { cause: more.cause })
    this.name = 'OgeeError'
    this.code = code
    this.facts = more.facts ?? {}
    this.errors = more.errors ?? []
  }

  get status(): number {
    return errorTable[this.code].status
  }

  get exit(): number {
    return errorTable[this.code].exit
  }
}

/** True for an OgeeError with that code (or any code, when none is given). */
export function isOgeeError(value: unknown, code?: ErrorCode): value is OgeeError {
  return value instanceof OgeeError && (code === undefined || value.code === code)
}
