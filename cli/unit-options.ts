import { OgeeError } from '../shared/errors.ts'
import { limits } from '../shared/limits.ts'
import { type Applied, readApplied } from './applied.ts'
import type { Given, OptionSpec } from './command.ts'
import { appliedOption, effectsOption, rangeOption } from './measurement-options.ts'
import { text } from './option-values.ts'
import { readRevision } from './revision.ts'

/** The unit flags: which unit, channel and range, under which design, and how it was measured. */
export type UnitOptions = {
  design: string | undefined
  revision: number | 'released' | undefined
  lot: string | undefined
  unit: string | undefined
  channel: string | undefined
  range: string | undefined
  applied: Applied | undefined
  effects: 'design' | 'learned' | undefined
  follows: string | undefined
  instrument: string | undefined
  /** As typed; read with units when it is needed. */
  temperature: string | undefined
  note: string | undefined
  measuredAt: string | undefined
  key: string | undefined
  spool: string | undefined
  dryRun: boolean
}

export const unitOptions: readonly OptionSpec[] = [
  { flags: '--design <key>', says: 'design; or name the lot' },
  { flags: '--revision <number>', says: 'revision of the design, or released (default: the released one)' },
  { flags: '--lot <lot>', says: 'lot; it says which design and revision' },
  { flags: '--unit <serial>', says: 'serial of the unit (else the unit column of the points)' },
  { flags: '--channel <name>', says: 'channel, where the design has several' },
  rangeOption,
  appliedOption,
  effectsOption,
  { flags: '--follows <record>', says: 'last, or the id of the record that this pass goes on from' },
  { flags: '--instrument <id>', says: 'instrument that measured' },
  { flags: '--temperature <value>', says: 'temperature while measuring, degrees Celsius' },
  { flags: '--note <text>', says: 'a note to keep with the record' },
  { flags: '--measured-at <time>', says: 'when it was measured, such as 2026-03-02T14:07:31+01:00' },
  {
    flags: '--key <key>',
    says: 'idempotency key (default: made from the request, so a repeat doubles nothing)',
  },
  {
    flags: '--spool <folder>',
    says: 'while the server is away: codes from what is kept here, put down in this folder, sent later',
    completes: 'folder',
  },
  { flags: '--dry-run', says: 'compute and print; record nothing' },
]

/** `designElsewhere`: each line of the input may name its own. */
export function readUnitOptions({ options }: Given, designElsewhere = false): UnitOptions {
  const revision = text(options.revision)
  const applied = text(options.applied)
  const design = text(options.design)
  const lot = text(options.lot)
  if (design === undefined && lot === undefined && !designElsewhere) {
    throw new OgeeError('usage', 'Name the design with --design, or the lot with --lot.')
  }
  return {
    design,
    revision: revision === undefined ? undefined : readRevision(revision),
    lot,
    unit: text(options.unit),
    channel: text(options.channel),
    range: text(options.range),
    applied: applied === undefined ? undefined : readApplied(applied),
    effects: options.effects === 'learned' || options.effects === 'design' ? options.effects : undefined,
    follows: text(options.follows),
    instrument: text(options.instrument),
    temperature: text(options.temperature),
    note: text(options.note),
    measuredAt: text(options.measuredAt),
    key: readKey(text(options.key)),
    ...readSpool(text(options.spool), options.dryRun === true),
  }
}

function readSpool(spool: string | undefined, dryRun: boolean): Pick<UnitOptions, 'spool' | 'dryRun'> {
  if (spool === '') throw new OgeeError('usage', '--spool takes a folder.')
  if (spool !== undefined && dryRun) {
    throw new OgeeError('usage', 'Give --spool or --dry-run: a dry run puts nothing down.')
  }
  return { spool, dryRun }
}

function readKey(key: string | undefined): string | undefined {
  if (key === undefined || (/^[\x21-\x7e]+$/.test(key) && key.length <= limits.idempotencyKeyMax)) return key
  throw new OgeeError(
    'usage',
    `--key takes 1 to ${limits.idempotencyKeyMax} visible ASCII characters without spaces.`,
  )
}
