import {
  type DesignLine,
  getDesign,
  postDesign,
  type RevisionLine,
} from '../../../shared/contract/designs.ts'
import { postRevision, putRevision } from '../../../shared/contract/revisions.ts'
import { isOgeeError, OgeeError } from '../../../shared/errors.ts'
import { canonicalBytes } from '../../../shared/ledger/canonical.ts'
import type { Client } from '../../client.ts'
import { type Command, type Context, everyFormat, type Given } from '../../command.ts'
import type { ConnectionOptions } from '../../config.ts'
import { readDesignAsSent } from '../../design-file.ts'
import { text } from '../../option-values.ts'
import { print } from '../../output.ts'
import { type Done, revisionRendering } from '../../revision-rendering.ts'
import { connect, readConnection, serverAbout, serverOptions } from '../../server-options.ts'

type Options = ConnectionOptions & {
  key: string
  document: string
  ifMatch: string | undefined
  asNew: boolean
}
export const designPushCommand: Command<Options> = {
  about:
    'Creates the design, or its next draft revision, or saves the draft that is open. A draft that is there with\n' +
    'another document is replaced only when --if-match gives its etag (`ogee design show` prints it), so that\n' +
    `nobody's work is lost; --new starts another draft beside it. Pushing the same again changes nothing.\n\n${serverAbout}`,
  arguments: [{ name: '<key>', says: 'key of the design' }],
  options: [
    {
      flags: '--document <file>',
      says: 'design document, ogee.design/1; - reads standard input',
      required: true,
      completes: 'file',
    },
    { flags: '--if-match <etag>', says: 'etag of the draft to replace, with or without its quotes' },
    { flags: '--new', says: 'start another draft even where one is open' },
    ...serverOptions,
  ],
  formats: everyFormat,
  examples: [
    {
      run: 'ogee design push DBS-B --document design.json',
      says: 'A new design; its revision 1 is a draft.',
    },
    {
      run: 'ogee design push DBS-A --document design.json --new',
      says: 'Another draft of a design that the server has.',
    },
  ],
  read: readPush,
  run: push,
}

function readPush(given: Given): Options {
  const etag = text(given.options.ifMatch)
  const asNew = given.options.new === true
  if (etag !== undefined && asNew) {
    throw new OgeeError('usage', '--if-match replaces a draft and --new starts another: give one of them.')
  }
  return {
    ...readConnection(given),
    key: given.args[0] ?? '',
    document: text(given.options.document) ?? '',
    ifMatch: etag === undefined || etag.startsWith('"') || etag === '*' ? etag : `"${etag}"`,
    asNew,
  }
}

type Pushed = { done: Done; revision: RevisionLine }
/** As in the file, and the hash by which the server will keep it. */
type Document = Awaited<ReturnType<typeof readDesignAsSent>> & { hash: string }

async function push(options: Options, context: Context): Promise<number> {
  const read = await readDesignAsSent(context.io, options.document)
  const { createHash } = await import('node:crypto')
  const hash = createHash('sha256').update(canonicalBytes(read.sent)).digest('hex')
  const document = { ...read, hash }
  const client = await connect(options, context)
  const design = (await found(client, options.key)) ?? (await created(client, options, document))
  const { done, revision } = 'done' in design ? design : await pushInto(client, options, design, document)
  await print(revisionRendering(options.key, revision, done), context)
  return 0
}

async function found(client: Client, key: string): Promise<DesignLine | null> {
  return client.call(getDesign, { params: { key } }).catch((error: unknown) => {
    if (isOgeeError(error, 'not-found')) return null
    throw error
  })
}

/** A key that is taken after all was taken by somebody else just now, or by this very request whose answer was lost. */
async function created(
  client: Client,
  { key, ifMatch }: Options,
  { sent }: Document,
): Promise<Pushed | DesignLine> {
  if (ifMatch !== undefined) throw nothingToReplace(key)
  try {
    const made = await client.call(postDesign, { body: { key, document: sent as never } })
    return { done: 'created', revision: made.revisions[0]! }
  } catch (error) {
    const there = isOgeeError(error, 'already-exists') ? await found(client, key) : null
    if (there) return there
    throw error
  }
}

async function pushInto(
  client: Client,
  { key, ifMatch, asNew }: Options,
  { revisions }: DesignLine,
  { sent, hash }: Document,
): Promise<Pushed> {
  const document = sent as never
  const draft = revisions.filter(({ state }) => state === 'draft').at(-1)
  if (!draft || asNew) {
    if (ifMatch !== undefined) throw nothingToReplace(key)
    return {
      done: 'started',
      revision: await client.call(postRevision, { params: { key }, body: { document } }),
    }
  }
  if (draft.hash === hash) return { done: 'unchanged', revision: draft }
  if (ifMatch === undefined) throw wouldReplace(key, draft)
  const params = { key, number: draft.number }
  return { done: 'saved', revision: await client.call(putRevision, { params, body: { document }, ifMatch }) }
}

const nothingToReplace = (key: string) =>
  new OgeeError(
    'precondition-failed',
    `Design ${key} has no draft that could be replaced. Leave --if-match out to start one.`,
  )

function wouldReplace(key: string, { number, savedBy, savedAt, etag }: RevisionLine): OgeeError {
  return new OgeeError(
    'precondition-required',
    `Revision ${number} of ${key} is a draft that ${savedBy} saved at ${savedAt}. ` +
      `Look at it with \`ogee design diff ${key} ${number} --document\`, then give --if-match '${etag}' to replace it, or --new.`,
    { facts: { revision: number, savedBy, savedAt, etag } },
  )
}
