import * as z from 'zod'
import { limits } from '../limits.ts'

/** Building blocks that several resources share. JSON numbers are finite by nature; volts and ohms are plain numbers. */

export const finite = z.number()
export const positive = z.number().positive()
export const notNegative = z.number().nonnegative()
export const code = z
  .int()
  .nonnegative()
  .max(2 ** limits.converterBitsMax - 1)
/** Bounded, so that every database and language can hold it whatever its offset. */
export const instant = z.iso
  .datetime({ offset: true })
  .refine((text) => text >= '1970' && text < '2200', 'Use a time between 1970 and 2200.')
export const sha256Hex = z.string().regex(/^[0-9a-f]{64}$/)
export const coding = z.enum(['straight-binary', 'offset-binary', 'twos-complement'])
export const method = z.enum(['best-fit', 'minimax', 'terminal'])

const keyLike = /^[A-Za-z0-9](?:[A-Za-z0-9._-]*[A-Za-z0-9])?$/
export const designKey = z
  .string()
  .max(limits.designKeyMax)
  .regex(keyLike, 'Use letters, digits, dot, dash or underscore.')
export const lotKey = z
  .string()
  .max(limits.lotKeyMax)
  .regex(keyLike, 'Use letters, digits, dot, dash or underscore.')
export const rangeId = z
  .string()
  .max(limits.rangeIdMax)
  .regex(keyLike, 'Use letters, digits, dot, dash or underscore.')
export const instrumentId = z
  .string()
  .max(limits.instrumentIdMax)
  .regex(keyLike, 'Use letters, digits, dot, dash or underscore.')
/** A day of the calendar, such as 2026-11-01; days begin and end in UTC. */
export const calendarDay = z.iso
  .date('Write the day as 2026-11-01.')
  .refine((day) => day >= '1970' && day < '2200', 'Use a day between 1970 and 2200.')
export const revisionNumber = z.int().positive().max(1_000_000)
export const recordId = z.uuid()

/** True when the text has no control, format or private characters (a joiner inside an emoji is fine) and no space at either end. */
function isPlainText(text: string): boolean {
  return (
    text === text.trim() && !/[\p{Cs}\p{Cc}\p{Cf}\p{Co}\p{Zl}\p{Zp}]/u.test(text.replaceAll('\u200d', ''))
  )
}

/** One line of text that people read: trimmed, printable, NFC. */
export const plainText = (max: number) =>
  z
    .string()
    .min(1, 'It is missing.')
    .max(max, `At most ${max} characters.`)
    .refine(isPlainText, 'Use printable characters with no space at either end.')
    .refine((text) => text === text.normalize('NFC'), 'Use the composed (NFC) form of accented letters.')

/** Why somebody did what cannot be undone. */
export const reason = plainText(limits.reasonMax).min(
  limits.reasonMin,
  `Give a reason of at least ${limits.reasonMin} characters.`,
)

/** A unit's serial: case matters, nothing is trimmed or folded (contract.md). */
export const serial = plainText(limits.serialMax)
export const channel = plainText(limits.channelNameMax)
export const note = z.string().max(limits.noteMax)

export const role = z.enum(['administrator', 'engineer', 'operator', 'auditor'])
export type Role = z.output<typeof role>

export const scope = z.enum([
  'designs:read',
  'designs:write',
  'trims:write',
  'trims:read',
  'trims:read-all',
  'ledger:read',
])
export type Scope = z.output<typeof scope>

export const verdict = z.enum(['ok', 'out-of-reach', 'too-coarse', 'suspect'])
export type Verdict = z.output<typeof verdict>
export const outcome = z.enum(['pass', 'conditional-pass', 'conditional-fail', 'fail'])
export type Outcome = z.output<typeof outcome>

/** A pair of codes: an absent adjuster's key is absent. */
export const codePair = z.strictObject({ gain: code.optional(), offset: code.optional() })
export const applied = z.union([z.literal('neutral'), codePair])

/** A keyset page: `next` is passed back as `after`; null on the last page. */
export const page = <Item extends z.ZodType>(item: Item) =>
  z.object({ items: z.array(item), next: z.string().nullable() })
export const pageQuery = {
  after: z.string().max(200).optional(),
  limit: z.coerce.number().int().min(1).max(limits.pageMax).default(limits.pageDefault),
}
