import {
  type Ladder,
  type LadderAxis,
  ladderAxis,
  octavesAbove,
} from '../../../shared/solver/sizing/ladder.ts'

/** Where the parts of the ladders stand, in pixels. Volts come from the solver; nothing is worked out here but places. */
export type LadderFrame = {
  axis: LadderAxis
  lsbV: number
  ladders: readonly { ladder: Ladder; centre: number }[]
  /** Left axis, right axis, and the right end of the ppm labels. */
  left: number
  right: number
  end: number
  top: number
  bottom: number
  y: (outputV: number) => number
}

/** Rails 48 apart; bracket 18 right of them (tokens.md, Trim ladder). */
export const halfRails = 24
export const bracketGap = 18

const widest = 558
const leastForTwo = 510
const narrow = 480
const axisX = 52
const rightRoom = 84
const firstCentre = 69
const headRoom = 42
const footRoom = 26

export type LadderScale = { lsbV: number; fsrV: number }

/** One frame that the ladders share, or where there is no room for that, one below the other. */
export function ladderFrames(
  ladders: readonly Ladder[],
  { lsbV, fsrV }: LadderScale,
  roomPx: number,
): { frames: LadderFrame[]; width: number; height: number } {
  const width = Math.min(roomPx, widest)
  const octavePx = width < narrow ? 22 : 24
  const groups = ladders.length > 1 && width < leastForTwo ? ladders.map((one) => [one]) : [ladders]
  let top = 0
  const frames = groups.map((group) => {
    const frame = frameOf(group, ladderAxis(group, lsbV, fsrV), {
      lsbV,
      width,
      top: top + headRoom,
      octavePx,
    })
    top = frame.bottom + footRoom
    return frame
  })
  return { frames, width, height: top }
}

function frameOf(
  group: readonly Ladder[],
  axis: LadderAxis,
  { lsbV, width, top, octavePx }: { lsbV: number; width: number; top: number; octavePx: number },
): LadderFrame {
  const right = width - rightRoom
  const slot = (right - axisX) / Math.max(1, group.length)
  const height = octavesAbove(axis.topV, axis.bottomV) * octavePx
  return {
    axis,
    lsbV,
    ladders: group.map((ladder, i) => ({ ladder, centre: Math.round(axisX + i * slot + firstCentre) })),
    left: axisX,
    right,
    end: width - 2,
    top,
    bottom: top + height,
    y: (outputV) => top + height - octavesAbove(outputV, axis.bottomV) * octavePx,
  }
}
