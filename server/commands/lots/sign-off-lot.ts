import type * as z from 'zod'
import type { signOffRequest } from '../../../shared/contract/lot-acts.ts'
import { type Standing, undecidedStandings } from '../../../shared/contract/lot-standing.ts'
import { type FieldError, OgeeError } from '../../../shared/errors.ts'
import { limits } from '../../../shared/limits.ts'
import { sqlTime } from '../../db/sql.ts'
import { transaction } from '../../db/transaction.ts'
import type { Deps } from '../../http/deps.ts'
import { insertLeaves, newLeaf } from '../../ledger/leaves.ts'
import { readBoard } from './board.ts'
import type { LotStandings } from './count-lot.ts'
import { type LotHead, type LotName, lockLot, type SignOffBody } from './find-lot.ts'
import { wrongState } from './lot-rules.ts'
import { readLot } from './read-lots.ts'

type Asked = LotName & z.output<typeof signOffRequest> & { by: string; ifMatch: string }
type Open = { unit: string; standing: Standing | 'missing' }

/**
 * Signs off a lot.
 * Guarantee: it is signed off exactly when the `sign-off` leaf exists, which names every unit that is in it and every one that
 * is left out with its reason; it is the lot that the engineer saw; no record that names the lot is stored after it.
 */
export async function signOffLot(
  { database, now, notifyLedger }: Pick<Deps, 'database' | 'now' | 'notifyLedger'>,
  asked: Asked,
): Promise<LotHead> {
  const signed = await transaction(database, async (sql) => {
    const lot = await lockLot(sql, asked)
    if (lot.state === 'signed-off') {
      throw wrongState(`Lot ${lot.key} was signed off by ${lot.signOff?.signedBy ?? 'somebody'}.`, lot.state)
    }
    const board = await readBoard(sql, lot)
    const { detail, standings } = await readLot(sql, lot, board)
    // An override or a withdrawal waits for no lot: it is in the board, and not in the etag.
    if (board.records !== lot.records) throw changed(detail.etag)
    requireMatch(detail.etag, asked.ifMatch)
    const leftOut = decide(lot, standings, asked)
    const out = new Set(leftOut.map(({ unit }) => unit))
    const at = now()
    const body: SignOffBody = {
      format: 'ogee.sign-off/1',
      design: lot.design,
      lot: lot.key,
      revision: lot.revision,
      hash: lot.hash,
      records: lot.records,
      counts: standings.counts,
      units: standings.units
        .map(({ unit }) => unit.serial)
        .filter((serial) => !out.has(serial))
        .sort(byText),
      leftOut,
      references: standings.references,
      note: asked.note ?? null,
      signedBy: asked.by,
    }
    const [leafId] = await insertLeaves(sql, [newLeaf('sign-off', at.toISOString(), body)])
    await sql.run('INSERT INTO lot_sign_offs (lot_id, by_name, at, leaf_id) VALUES ?', [
      [[lot.id, asked.by, sqlTime(at), leafId!]],
    ])
    await sql.run(
      `UPDATE lots SET state = 'signed-off', closed_by = COALESCE(closed_by, ?), closed_at = COALESCE(closed_at, ?)
        WHERE id = ?`,
      [asked.by, sqlTime(at), lot.id],
    )
    return lockLot(sql, asked)
  })
  notifyLedger()
  return signed
}

function requireMatch(etag: string, ifMatch: string): void {
  if (ifMatch !== etag && ifMatch !== '*') throw changed(etag)
}

function changed(etag: string): OgeeError {
  return new OgeeError(
    'precondition-failed',
    'The lot has changed since you opened it. Look at it again, then sign off.',
    { facts: { etag } },
  )
}

/** Every unit that needs a decision gets one; a good one may be left out too. */
function decide(lot: LotHead, { units, missing }: LotStandings, asked: Asked): SignOffBody['leftOut'] {
  if (units.length === 0) throw undecided(`Lot ${lot.key} has no units.`, [])
  requireReasons(asked)
  const stands = new Map<string, Open['standing']>(units.map(({ unit, standing }) => [unit.serial, standing]))
  for (const serial of missing) stands.set(serial, 'missing')
  const decided = new Map(asked.leaveOut.map(({ unit, reason }) => [unit, reason]))
  const strangers = [...decided.keys()].filter((unit) => !stands.has(unit))
  if (strangers.length > 0) {
    throw new OgeeError('lot-unit-unknown', `Lot ${lot.key} has no unit ${strangers[0]} to leave out.`, {
      errors: strangers
        .slice(0, 100)
        .map((unit) => ({ path: '/leaveOut', message: `There is no unit ${unit}.` })),
    })
  }
  const open = [...stands].flatMap(([unit, standing]): Open[] =>
    needsDecision(standing) ? [{ unit, standing }] : [],
  )
  if (asked.rest) for (const { unit } of open) if (!decided.has(unit)) decided.set(unit, asked.rest.reason)
  const left = open.filter(({ unit }) => !decided.has(unit))
  if (left.length > 0) throw undecided(undecidedSentence(left), left)
  return [...decided]
    .map(([unit, reason]) => ({ unit, reason: reason.trim(), standing: stands.get(unit) ?? 'missing' }))
    .sort((a, b) => byText(a.unit, b.unit))
}

const byText = (a: string, b: string) => (a < b ? -1 : 1)
const needsDecision = (standing: Open['standing']) =>
  standing === 'missing' || undecidedStandings.includes(standing)

function requireReasons({ leaveOut, rest }: Asked): void {
  const isShort = (reason: string) => [...reason.trim()].length < limits.reasonMin
  const errors: FieldError[] = leaveOut.flatMap(({ reason }, i) =>
    isShort(reason)
      ? [{ path: `/leaveOut/${i}/reason`, message: `At least ${limits.reasonMin} characters.` }]
      : [],
  )
  if (rest && isShort(rest.reason)) {
    errors.push({ path: '/rest/reason', message: `At least ${limits.reasonMin} characters.` })
  }
  if (errors.length === 0) return
  throw new OgeeError('reason-required', `Give a reason of at least ${limits.reasonMin} characters.`, {
    errors: errors.slice(0, 100),
  })
}

const words: Partial<Record<Open['standing'], string>> = {
  'out-of-reach': 'is out of reach and undecided',
  fail: 'fails and is undecided',
  'conditional-fail': 'fails inside the guard band and is undecided',
  suspect: 'is suspect and undecided',
  incomplete: 'lacks a channel or range that others have',
  missing: 'is expected and not recorded',
}

function undecidedSentence([first, ...others]: readonly Open[]): string {
  if (!first) return ''
  const more = others.length === 0 ? '' : `, and ${others.length} more`
  return `Unit ${first.unit} ${words[first.standing]}${more}. Decide, then sign off.`
}

function undecided(message: string, open: readonly Open[]): OgeeError {
  return new OgeeError('lot-undecided', message, {
    facts: { undecided: open.length },
    errors: open.slice(0, 100).map(({ unit, standing }) => ({
      path: '/leaveOut',
      message: `Unit ${unit} ${words[standing]}.`,
    })),
  })
}
