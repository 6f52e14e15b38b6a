import type { Trimmer, Trimmers } from '../adjuster.ts'
import type { Channel } from '../channel.ts'
import { effectAt, nullingPoint } from '../solve-exact.ts'
import { type Term, type Terms, toStay } from './budget.ts'
import { planVariance } from './plan.ts'
import type { Residual, ResidualLine, SizingDesign } from './types.ts'

type Bare = Pick<ResidualLine, 'name' | 'worstV' | 'standardV' | 'path' | 'kind'> & { biasV?: number }

/**
 * What is left after a trim, line by line, largest first, at the end of the range where the worst-case sum is larger.
 * @param all the budget's lines; @param reach those (or the measured units) that a trim takes out
 * @returns worst-case sum and RSS = 2·√Σu² (both with the biases of drift and noise lines), V, LSB, ppm of FSR
 * Source: solver.md section 6.
 */
export function residualBudget(
  design: SizingDesign,
  channel: Channel,
  trimmers: Trimmers,
  all: Terms,
  reach: Terms,
): Residual {
  const low = linesAt(design, channel, trimmers, all, reach, true)
  const full = linesAt(design, channel, trimmers, all, reach, false)
  const atLow = worstSum(low) > worstSum(full)
  const { range } = channel
  return assemble(atLow ? low : full, atLow ? range.lowV : range.fullScaleV, channel)
}

function worstSum(lines: readonly Bare[]): number {
  let sum = 0
  for (const { worstV } of lines) sum += worstV
  return sum
}

function linesAt(
  design: SizingDesign,
  channel: Channel,
  trimmers: Trimmers,
  all: Terms,
  reach: Terms,
  atLow: boolean,
): Bare[] {
  const { range } = channel
  const x = atLow ? range.lowV : range.fullScaleV
  const lines: Bare[] = []
  for (const which of ['gain', 'offset'] as const) {
    const trimmer = trimmers[which]
    if (trimmer !== null)
      lines.push(...adjusterLines(design, trimmer, Math.abs(atLow ? trimmer.endLow : trimmer.endFull)))
  }
  lines.push(...measurementLines(channel, design.measurement.points ?? [], x))
  if (range.inlLsb > 0) {
    lines.push(rectangular('Converter INL', range.inlLsb * range.lsbV, 'neither', 'converter-inl'))
  }
  for (const term of toStay(all.gain)) lines.push(budgetLine(term, Math.abs(x - term.pivotV) / 1e6, 'gain'))
  for (const term of toStay(all.offset)) lines.push(budgetLine(term, 1, 'offset'))
  const left = notTrimmed(channel, trimmers, reach, atLow ? range.zLow : range.zFull)
  if (left !== null) lines.push(left)
  return lines
}

function rectangular(name: string, limit: number, path: Bare['path'], kind: Bare['kind']): Bare {
  return { name, worstV: limit, standardV: limit / Math.sqrt(3), path, kind }
}

function adjusterLines(design: SizingDesign, trimmer: Trimmer, effect: number): Bare[] {
  const { which, count } = trimmer
  const stepV = Math.abs(trimmer.stepV) * effect
  const { inlLsb, driftPpmPerK } = design.adjusters[which]!.source
  const kelvin = design.sizing?.temperatureSpanK ?? 0
  const lines: Bare[] = [
    {
      name: `Quantising, ${which}`,
      worstV: stepV / 2,
      standardV: stepV / Math.sqrt(12),
      path: which,
      kind: 'quantising',
    },
  ]
  if (inlLsb) lines.push(rectangular(`Auxiliary INL, ${which}`, inlLsb * stepV, which, 'auxiliary-inl'))
  if (driftPpmPerK && kelvin > 0) {
    const limit = (driftPpmPerK / 1e6) * count * stepV * kelvin
    lines.push(rectangular(`Auxiliary drift, ${which}`, limit, which, 'auxiliary-drift'))
  }
  return lines
}

/** The plan's own uncertainty of the line at x, and the instrument's limits there. */
function measurementLines(channel: Channel, codes: readonly number[], x: number): Bare[] {
  const lines: Bare[] = []
  const variance = planVariance(channel, codes)
  if (variance !== null) {
    const z = x - channel.range.x0
    const u = Math.sqrt(Math.max(variance.offset + z * (2 * variance.cov + z * variance.gain), 0))
    lines.push({ name: 'Measurement', worstV: 2 * u, standardV: u, path: 'neither', kind: 'measurement' })
  }
  const { instrument } = channel
  if (instrument !== null) {
    const gain = (instrument.gainPpm / 1e6) * Math.abs(x)
    if (instrument.gainPpm > 0) lines.push(rectangular('Instrument gain', gain, 'neither', 'instrument'))
    if (instrument.offsetV > 0) {
      lines.push(rectangular('Instrument offset', instrument.offsetV, 'neither', 'instrument'))
    }
  }
  return lines
}

function budgetLine(term: Term, lever: number, path: 'gain' | 'offset'): Bare {
  const biasV = Math.abs(term.nominal) * lever
  const worstV = term.limit * lever + biasV
  return { name: term.name, worstV, standardV: term.u * lever, path, kind: 'budget', biasV }
}

/**
 * What a lone adjuster leaves at z of the errors that it is trimmed on: each line's error there less what nulling it
 * elsewhere takes away. Null with two adjusters, and where nothing is left.
 */
function notTrimmed(channel: Channel, { gain, offset }: Trimmers, reach: Terms, z: number): Bare | null {
  if (gain !== null && offset !== null) return null
  const alone = gain ?? offset
  if (alone === null) return null
  const { range } = channel
  const at = nullingPoint(alone, range)
  const taken = effectAt(alone, z) / effectAt(alone, at)
  let worstV = 0
  let squares = 0
  let biasV = 0
  const add = (term: Term, left: number): void => {
    worstV += Math.abs(left) * term.limit
    squares += left * term.u * (left * term.u)
    biasV += left * term.nominal
  }
  for (const term of reach.offset) add(term, 1 - taken)
  for (const term of reach.gain) {
    const shift = range.x0 - term.pivotV
    add(term, (shift + z - (shift + at) * taken) / 1e6)
  }
  biasV = Math.abs(biasV)
  if (!(worstV + biasV > 0)) return null
  const missing = gain === null ? 'gain' : 'offset'
  return {
    name: `Not trimmed, no ${missing} adjuster`,
    worstV: worstV + biasV,
    standardV: Math.sqrt(squares),
    path: missing,
    kind: 'not-trimmed',
    biasV,
  }
}

function assemble(bare: Bare[], atV: number, channel: Channel): Residual {
  const { lsbV, fsrV } = channel.range
  const worstCaseV = worstSum(bare)
  let squares = 0
  let biasV = 0
  for (const line of bare) {
    squares += line.standardV * line.standardV
    biasV += line.biasV ?? 0
  }
  const rssV = 2 * Math.sqrt(squares) + biasV
  const lines = bare.map(
    (line): ResidualLine => ({
      name: line.name,
      worstV: line.worstV,
      standardV: line.standardV,
      path: line.path,
      kind: line.kind,
      worstLsb: line.worstV / lsbV,
      worstPpm: (line.worstV / fsrV) * 1e6,
      share: worstCaseV > 0 ? line.worstV / worstCaseV : 0,
      biasV: line.biasV ?? 0,
    }),
  )
  // Sorting is stable: equal lines keep the order of the circuit and the budget.
  lines.sort((a, b) => b.worstV - a.worstV)
  return {
    lines,
    worstCaseV,
    rssV,
    worstCaseLsb: worstCaseV / lsbV,
    rssLsb: rssV / lsbV,
    worstCasePpm: (worstCaseV / fsrV) * 1e6,
    rssPpm: (rssV / fsrV) * 1e6,
    atV,
  }
}
