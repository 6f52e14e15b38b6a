import { type DesignLine, getDesign, type RevisionLine } from '../../../shared/contract/designs.ts'
import { postReview } from '../../../shared/contract/revisions.ts'
import { isOgeeError, OgeeError } from '../../../shared/errors.ts'
import type { Client } from '../../client.ts'
import { type Command, type Context, everyFormat, type Given } from '../../command.ts'
import type { ConnectionOptions } from '../../config.ts'
import { text, wholeNumber } from '../../option-values.ts'
import { print } from '../../output.ts'
import { revisionRendering } from '../../revision-rendering.ts'
import { connect, readConnection, serverAbout, serverOptions } from '../../server-options.ts'

type Options = ConnectionOptions & { key: string; revision: number | undefined }

export const designSubmitCommand: Command<Options> = {
  about:
    'Takes the highest draft unless told otherwise. What is in review already stays there, so that the same command\n' +
    `may be run again. Releasing is for people.\n\n${serverAbout}`,
  arguments: [{ name: '<key>', says: 'key of the design' }],
  options: [{ flags: '--revision <number>', says: 'revision to submit' }, ...serverOptions],
  formats: everyFormat,
  examples: [
    {
      run: 'ogee design submit DBS-A --revision 2',
      says: 'Revision 2 waits for another engineer to release it.',
    },
  ],
  read: (given: Given) => {
    const number = text(given.options.revision)
    return {
      ...readConnection(given),
      key: given.args[0] ?? '',
      revision: number === undefined ? undefined : wholeNumber('--revision', number, 1, 1_000_000),
    }
  },
  run: submit,
}

async function submit(options: Options, context: Context): Promise<number> {
  const client = await connect(options, context)
  const design = await client.call(getDesign, { params: { key: options.key } })
  const chosen = choose(design, options.revision)
  const isThere = chosen.state === 'in-review'
  const revision = isThere ? chosen : await submitted(client, options.key, chosen)
  await print(revisionRendering(options.key, revision, isThere ? 'unchanged' : 'submitted'), context)
  return 0
}

function choose({ key, revisions }: DesignLine, number: number | undefined): RevisionLine {
  const found =
    number === undefined
      ? (revisions.filter(({ state }) => state === 'draft').at(-1) ?? revisions.at(-1))
      : revisions.find((revision) => revision.number === number)
  if (!found) throw new OgeeError('not-found', `Design ${key} has no revision ${number}.`)
  if (found.state === 'draft' || found.state === 'in-review') return found
  throw new OgeeError(
    'revision-state',
    `Revision ${found.number} of ${key} is ${found.state}; only a draft can be submitted. \`ogee design push\` starts one.`,
    { facts: { state: found.state, etag: found.etag } },
  )
}

/** Submitted as it was seen. An answer that was lost is found again: the same bytes are in review then. */
async function submitted(
  client: Client,
  key: string,
  { number, etag, hash }: RevisionLine,
): Promise<RevisionLine> {
  const params = { key, number }
  return client.call(postReview, { params, ifMatch: etag }).catch(async (error: unknown) => {
    if (!isOgeeError(error, 'revision-state')) throw error
    const now = (await client.call(getDesign, { params: { key } })).revisions.find(
      (one) => one.number === number,
    )
    if (now?.state === 'in-review' && now.hash === hash) return now
    throw error
  })
}
