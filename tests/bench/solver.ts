import { all, create, type Matrix } from 'mathjs'
import { codesOn } from '../../shared/solver/codes.ts'
import { studentUpper } from '../../shared/solver/distribution/student.ts'
import { jointCodes } from '../../shared/solver/joint-codes.ts'
import { prepareTrim, type TrimChannel } from '../../shared/solver/prepare-trim.ts'
import type { MeasuredPoint } from '../../shared/solver/types.ts'
import { seededRandom } from '../support/random.ts'
import { exampleDesign } from '../support/solver-fixtures.ts'
import { type BenchRow, median } from './row.ts'

const math = create(all!)
const codes = [0, 65536, 131072, 196608, 262143]
const LSB = 10 / 262144
const units = 400
const rounds = 15
const warming = 10

/**
 * P1: fit and codes of five points, single thread, against the same results through mathjs matrices: line by lusolve of
 * the normal equations, covariance and leverages by inv, bow by a second lusolve and inv, node voltages by lusolve.
 * Quantiles and the search for codes are ours on both sides. Both read units drawn anew, so nothing is remembered.
 */
export function benchSolver(): BenchRow[] {
  const prepared = prepareTrim(exampleDesign('unipolar-18'))
  const drawn = drawUnits(4126)
  for (const points of drawn.slice(0, 50)) mustAgree(prepared, points)
  const ours: number[] = []
  const peer: number[] = []
  for (let round = -warming; round < rounds; round += 1) {
    const a = timed(() => drawn.forEach((points) => void codesOn(prepared, points, { applied: 'neutral' })))
    const b = timed(() => drawn.forEach((points) => void throughMatrices(prepared, points)))
    // The first rounds let the engine compile both.
    if (round < 0) continue
    ours.push((a / units) * 1000)
    peer.push((b / units) * 1000)
  }
  const [mine, other] = [median(ours), median(peer)]
  // Round by round, so that a busy moment of the machine weighs on both sides of a ratio.
  const ratio = median(ours.map((us, i) => peer[i]! / us))
  return [
    {
      id: 'P1',
      name: 'fit + codes of 5 points (times as fast)',
      ours: `${mine.toFixed(2)} us`,
      peer: `${other.toFixed(1)} us`,
      ratio,
      goal: 'at least 20',
      met: ratio >= 20,
    },
  ]
}

function timed(act: () => void): number {
  const start = performance.now()
  act()
  return performance.now() - start
}

function drawUnits(seed: number): MeasuredPoint[][] {
  const random = seededRandom(seed)
  const even = (size: number) => (2 * random.next() - 1) * size
  return Array.from({ length: units }, () => {
    const [offset, gain] = [even(30e-6), even(390e-6)]
    return codes.map((code) => {
      const x = code * LSB
      return { code, measured: x + offset + gain * x + even(0.3 * LSB) }
    })
  })
}

type Answer = {
  offset: number
  gain: number
  uOffset: number
  uGain: number
  k: number
  gainCode: number
  offsetCode: number
  bow: number
  outliers: number
}

function throughMatrices({ channel, trimmers }: TrimChannel, points: readonly MeasuredPoint[]): Answer {
  const { range } = channel
  const z = points.map(({ code }) => range.lowV + code! * range.lsbV - range.x0)
  const e = points.map(({ measured }, i) => measured! - z[i]! - range.x0)
  const n = points.length
  const a = math.matrix(z.map((v) => [1, v]))
  const y = math.matrix(e.map((v) => [v]))
  const at = math.transpose(a)
  const normal = math.multiply(at, a)
  const line = math.lusolve(normal, math.multiply(at, y)) as Matrix
  const r = math.subtract(y, math.multiply(a, line)) as Matrix
  const squares = (math.multiply(math.transpose(r), r) as Matrix).get([0, 0]) as number
  const inverse = math.inv(normal)
  const cov = math.multiply(inverse, squares / (n - 2)) as Matrix
  const hat = math.multiply(math.multiply(a, inverse), at) as Matrix
  const limit = studentUpper(0.001 / (2 * n), n - 3)
  let outliers = 0
  for (let i = 0; i < n; i++) {
    const rest = 1 - (hat.get([i, i]) as number)
    const ri = r.get([i, 0]) as number
    const s2 = (squares - (ri * ri) / rest) / (n - 3)
    if ((ri * ri) / rest > limit * limit * s2 && Math.abs(ri) / rest > 0.25 * range.lsbV) outliers += 1
  }
  const [offset, gain] = [line.get([0, 0]) as number, line.get([1, 0]) as number]
  const [varO, varG] = [cov.get([0, 0]) as number, cov.get([1, 1]) as number]
  const k = studentUpper(0.025, n - 2)
  const m = math.matrix([
    [trimmers.offset!.alpha, trimmers.gain!.alpha],
    [trimmers.offset!.beta, trimmers.gain!.beta],
  ])
  const moves = math.lusolve(m, math.matrix([[-offset], [-gain]])) as Matrix
  const start = {
    errorLow: offset + gain * range.zLow,
    errorFull: offset + gain * range.zFull,
    gainV: 0,
    offsetV: 0,
  }
  const pair = jointCodes(
    trimmers.gain!,
    trimmers.offset!,
    start,
    moves.get([1, 0]) as number,
    moves.get([0, 0]) as number,
  )
  // Predicted line and its uncertainty at both ends.
  const ends = math.matrix([
    [1, range.zLow],
    [1, range.zFull],
  ])
  math.multiply(math.multiply(ends, cov), math.transpose(ends))
  return {
    offset,
    gain,
    uOffset: Math.sqrt(varO),
    uGain: Math.sqrt(varG),
    k,
    gainCode: pair!.gain,
    offsetCode: pair!.offset,
    bow: bowOf(z, y, range.fullScaleV - range.lowV),
    outliers,
  }
}

/** The quadratic term with its standard deviation, on abscissas scaled to 1 so that the equations stay solvable. */
function bowOf(z: readonly number[], y: Matrix, span: number): number {
  const q = math.matrix(z.map((v) => [1, v / span, (v / span) * (v / span)]))
  const qt = math.transpose(q)
  const normal = math.multiply(qt, q)
  const c = math.lusolve(normal, math.multiply(qt, y)) as Matrix
  const r = math.subtract(y, math.multiply(q, c)) as Matrix
  const squares = (math.multiply(math.transpose(r), r) as Matrix).get([0, 0]) as number
  const variance = ((math.inv(normal) as Matrix).get([2, 2]) as number) * (squares / (z.length - 3))
  const bow = -(c.get([2, 0]) as number) / 4
  return Math.abs(c.get([2, 0]) as number) > studentUpper(0.005, z.length - 3) * Math.sqrt(variance) ? bow : 0
}

/** A bench of two things that answer differently would say nothing. */
function mustAgree(prepared: TrimChannel, points: readonly MeasuredPoint[]): void {
  const a = throughMatrices(prepared, points)
  const { fit, trim } = codesOn(prepared, points, { applied: 'neutral' })
  const near = (x: number, y: number) => Math.abs(x - y) <= 1e-6 * Math.abs(y) + 1e-12
  const same =
    near(a.offset, fit.offsetErrorV) &&
    near(a.gain * 1e6, fit.gainErrorPpm) &&
    near(a.uOffset, fit.standardUncertainty!.offsetV) &&
    near(a.uGain * 1e6, fit.standardUncertainty!.gainPpm) &&
    near(a.k, fit.expandedUncertainty!.kGain) &&
    a.gainCode === trim.codes?.gain &&
    a.offsetCode === trim.codes.offset &&
    a.outliers === fit.flags.filter(({ flag }) => flag === 'outlier').length
  if (!same) throw new Error(`ours and the peer differ: ${JSON.stringify({ a, fit, trim })}`)
}
