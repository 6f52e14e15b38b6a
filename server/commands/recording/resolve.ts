import type { Design } from '../../../shared/contract/design.ts'
import type { RecordRequest } from '../../../shared/contract/record.ts'
import { OgeeError } from '../../../shared/errors.ts'
import type { Catalogue, LotInPlay, RevisionInPlay } from './catalogue.ts'

/** Under which revision a request is computed: the one it names, else its lot's, else the highest released. */
export function resolveRevision(catalogue: Catalogue, request: RecordRequest): RevisionInPlay {
  const ofDesign = catalogue.revisions.filter((revision) => revision.design === request.design)
  const [first] = ofDesign
  if (!first)
    throw new OgeeError('not-found', `There is no design ${request.design}, or it is not open to you.`)
  const lot = resolveLot(catalogue.lots, request, first.designId)
  const wanted = typeof request.revision === 'number' ? request.revision : null
  if (lot && wanted !== null && wanted !== lot.revision) {
    throw new OgeeError('lot-unknown', `Lot ${lot.lotKey} is of revision ${lot.revision}, not ${wanted}.`, {
      errors: [{ path: '/lot', message: `The lot is of revision ${lot.revision}.` }],
    })
  }
  const number = wanted ?? (request.revision === 'released' ? null : (lot?.revision ?? null))
  const found = number === null ? highest(ofDesign) : ofDesign.find((revision) => revision.number === number)
  if (!found || found.state === 'draft' || found.state === 'in-review') {
    const which = number === null ? 'any revision' : `revision ${number}`
    throw new OgeeError('revision-not-released', `Design ${request.design} has not released ${which}.`, {
      errors: [{ path: '/revision', message: 'Not released.' }],
    })
  }
  return found
}

/** Withdrawn ones stand in only where nothing else was ever released; the rules for them follow. */
function highest(revisions: readonly RevisionInPlay[]): RevisionInPlay | undefined {
  const in_ = (state: string) => revisions.filter((revision) => revision.state === state).at(-1)
  return in_('released') ?? in_('withdrawn')
}

function resolveLot(lots: readonly LotInPlay[], request: RecordRequest, designId: number): LotInPlay | null {
  if (request.lot === undefined) return null
  const lot = lots.find((candidate) => candidate.designId === designId && candidate.lotKey === request.lot)
  if (lot?.state === 'open') return lot
  if (lot) {
    const state = lot.state === 'closed' ? 'closed' : 'signed off'
    throw new OgeeError(
      'lot-closed',
      `Lot ${request.lot} is ${state} and takes no further record. Record under an open lot, or without one.`,
      { errors: [{ path: '/lot', message: `The lot is ${state}.` }] },
    )
  }
  throw new OgeeError('lot-unknown', `There is no lot ${request.lot} of design ${request.design}.`, {
    errors: [{ path: '/lot', message: 'There is no such lot.' }],
  })
}

/** The channel and range, which default to the only one. */
export function resolvePlace(
  design: Design,
  request: Pick<RecordRequest, 'channel' | 'range'>,
): { channel: string; range: string } {
  const ranges = design.ranges.map((range) => range.id)
  return {
    channel: onlyOr('channel', request.channel, design.channels),
    range: onlyOr('range', request.range, ranges),
  }
}

function onlyOr(which: 'channel' | 'range', asked: string | undefined, known: readonly string[]): string {
  const names = known.slice(0, 8).join(', ') + (known.length > 8 ? ', …' : '')
  if (asked === undefined) {
    if (known.length === 1) return known[0]!
    throw new OgeeError(`${which}-required`, `The design has the ${which}s ${names}: name one.`, {
      errors: [{ path: `/${which}`, message: `Name one of ${names}.` }],
    })
  }
  if (known.includes(asked)) return asked
  throw new OgeeError(`${which}-unknown`, `The design has no ${which} ${asked}; it has ${names}.`, {
    errors: [{ path: `/${which}`, message: `It has ${names}.` }],
  })
}
