import { OgeeError } from '../errors.ts'
import { prepareTrimmer, type Trimmers } from './adjuster.ts'
import { type Channel, prepareChannel } from './channel.ts'
import type { Design } from './types.ts'

/** A channel with its adjusters, ready for any number of units. */
export type TrimChannel = { channel: Channel; trimmers: Trimmers }

/**
 * Checks a design's range and adjusters once, so that many units can be solved without doing it again.
 * @throws as `computeCodes`, for the design's part
 * @example codesOn(prepareTrim(unipolar18), points).trim.verdict // 'ok'
 */
export function prepareTrim(design: Design, rangeId?: string): TrimChannel {
  const channel = prepareChannel(design, rangeId)
  const trimmers = {
    gain: prepareTrimmer(channel, 'gain'),
    offset: prepareTrimmer(channel, 'offset'),
  }
  if (trimmers.gain === null && trimmers.offset === null) {
    const message = 'The design has neither a gain nor an offset adjuster, so there are no codes to find.'
    throw new OgeeError('no-adjuster', message, { errors: [{ path: '/adjusters', message }] })
  }
  return { channel, trimmers }
}
