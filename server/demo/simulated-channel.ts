import type { Point } from '../../shared/contract/point.ts'
import { appliedVoltages } from '../../shared/solver/applied.ts'
import { idealV } from '../../shared/solver/converter.ts'
import type { TrimChannel } from '../../shared/solver/prepare-trim.ts'
import type { Applied, Which } from '../../shared/solver/types.ts'
import type { DemoRandom } from './random.ts'

/** What one channel of a made-up unit is really like. */
export type TrueChannel = {
  offsetV: number
  gain: number
  /** How much more than nominal each adjuster moves the output, as a ratio. */
  effectFactor: Record<Which, number>
  /** Departure from the straight line at mid-scale, V. */
  bowV: number
}

/** The station's meter at that time: its own gain error and noise. */
export type Meter = { gain: number; noiseV: number }

export function drawChannel(
  random: DemoRandom,
  { channel }: TrimChannel,
  limits: { gainPpm: number; offsetV: number },
): TrueChannel {
  return {
    offsetV: random.within(limits.offsetV),
    gain: random.within(limits.gainPpm) * 1e-6,
    // One in eight has a part that is further from its nominal value, and comes back for a second pass.
    effectFactor: {
      gain: 1 + random.within(random.next() < 0.125 ? 0.08 : 0.015),
      offset: 1 + random.within(0.1),
    },
    bowV: random.within(0.15) * channel.range.lsbV,
  }
}

/** Readings at the plan's codes with some codes loaded, as the meter shows them. */
export function measure(
  random: DemoRandom,
  { channel, trimmers }: TrimChannel,
  truth: TrueChannel,
  applied: Applied,
  meter: Meter,
  codes: readonly number[],
): Point[] {
  const { range } = channel
  const nodes = appliedVoltages(trimmers, applied)
  return codes.map((code) => {
    const x = idealV(range, code)
    const z = x - range.x0
    const position = (2 * code) / range.count - 1
    let y = x + truth.offsetV + truth.gain * z + truth.bowV * (1 - position * position)
    for (const which of ['gain', 'offset'] as const) {
      const trimmer = trimmers[which]
      if (trimmer === null) continue
      const moved = nodes[which] - trimmer.nominalV
      y += truth.effectFactor[which] * (trimmer.alpha + trimmer.beta * z) * moved
    }
    const readings = Array.from({ length: 4 }, () =>
      shown(y * (1 + meter.gain) + random.normal() * meter.noiseV),
    )
    return { code, readings }
  })
}

/** The meter's last digit is 0.1 µV. */
const shown = (volts: number) => Math.round(volts * 1e7) / 1e7
