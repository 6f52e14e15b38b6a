import type { Design } from '../../../shared/contract/design.ts'
import type { DesignDifference } from '../../../shared/contract/revisions.ts'
import { diffDesigns } from '../../../shared/design-diff/diff-designs.ts'
import { OgeeError } from '../../../shared/errors.ts'
import type { Client } from '../../client.ts'
import { type Command, type Context, everyFormat, type Given } from '../../command.ts'
import type { ConnectionOptions } from '../../config.ts'
import { designFrom, readDesign } from '../../design-file.ts'
import { parseJson } from '../../files.ts'
import { text } from '../../option-values.ts'
import { print, type Rendering } from '../../output.ts'
import { fetchRevision, readRevision } from '../../revision.ts'
import { connect, readConnection, serverAbout, serverOptions } from '../../server-options.ts'

type Which = number | 'released'
type Options = ConnectionOptions & { key: string; before: Which; after: Which | { document: string } }
type Side = { name: string; design: Design }

export const designDiffCommand: Command<Options> = {
  about: `Revisions are numbers, or the word released. Ends with 0 whether or not they differ.\n\n${serverAbout}`,
  arguments: [
    { name: '<key>', says: 'key of the design' },
    { name: '<from>', says: 'the older revision' },
    { name: '[to]', says: 'the newer revision, unless --document is given' },
  ],
  options: [
    {
      flags: '--document <file>',
      says: 'compare with this design document; - reads standard input',
      completes: 'file',
    },
    ...serverOptions,
  ],
  formats: everyFormat,
  examples: [
    {
      run: 'ogee design diff DBS-A 1 2',
      says: 'Each field that changed, and verdict, bits, span and residual of both.',
    },
    { run: 'ogee design diff DBS-A released --document design.json', says: 'What a file would change.' },
  ],
  read: readDiff,
  run: diff,
}

function readDiff(given: Given): Options {
  const [key = '', before = '', after] = given.args
  const document = text(given.options.document)
  if ((after === undefined) === (document === undefined)) {
    throw new OgeeError('usage', 'Name a second revision, or a file with --document: one of the two.')
  }
  return {
    ...readConnection(given),
    key,
    before: readRevision(before, '<from>'),
    after: document === undefined ? readRevision(after ?? '', '[to]') : { document },
  }
}

async function diff({ key, before, after, ...options }: Options, context: Context): Promise<number> {
  const client = await connect(options, context)
  const older = await stored(client, key, before)
  const newer =
    typeof after === 'object'
      ? { name: after.document, design: await readDesign(context.io, after.document) }
      : await stored(client, key, after)
  await print(rendering(key, older, newer, diffDesigns(older.design, newer.design)), context)
  return 0
}

async function stored(client: Client, key: string, which: Which): Promise<Side> {
  const { revision, bytes } = await fetchRevision(client, key, which)
  const name = `revision ${revision.number}`
  return { name, design: designFrom(parseJson(bytes.toString('utf8'), name), name) }
}

function rendering(key: string, older: Side, newer: Side, difference: DesignDifference): Rendering {
  const { changes, effects } = difference
  return {
    json: { ...difference, design: key, before: older.name, after: newer.name },
    lines: [...changes, ...effects],
    table: () => `${sentences(key, older, newer, difference).join('\n')}\n`,
    csv: {
      heads: ['path', 'kind', 'label', 'before', 'after'],
      rows: changes.map(({ path, kind, label, before, after }) => [path, kind, label, before, after]),
    },
  }
}

function sentences(key: string, older: Side, newer: Side, { changes, effects }: DesignDifference): string[] {
  const head = `${key}, from ${older.name} to ${newer.name}:`
  if (changes.length === 0) return [`${head} no field differs.`]
  return [
    head,
    ...changes.map(({ sentence }) => `  ${sentence}`),
    ...effects.flatMap(({ range, sentences }) => [
      `The answer for range ${range}:`,
      ...(sentences.length === 0 ? ['  the same.'] : sentences.map((one) => `  ${one}`)),
    ]),
  ]
}
