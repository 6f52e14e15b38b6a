import { computeCodes } from '../../shared/solver/codes.ts'
import { fitPoints } from '../../shared/solver/fit.ts'
import type { Design, MeasuredPoint, Method } from '../../shared/solver/types.ts'
import { verifyPoints } from '../../shared/solver/verify.ts'
import { seededRandom } from './random.ts'

/**
 * Runs the solver over seeded units of the given designs, every method, weighted and not, one and two passes, and
 * digests all results to the last bit. No input or output, so that a browser can run the same text.
 */
export function solverDigest(designs: readonly Design[], seed: number): { digest: string; results: number } {
  const random = seededRandom(seed)
  let hash = 0x811c9dc5
  let results = 0
  const take = (result: unknown): void => {
    // JSON writes the shortest decimal that is the double: equal texts are equal bits.
    for (const letter of JSON.stringify(result)) hash = Math.imul(hash ^ letter.charCodeAt(0), 0x01000193)
    results += 1
  }
  const methods: readonly Method[] = ['best-fit', 'minimax', 'terminal']
  for (let unit = 0; unit < 200; unit += 1) {
    const design = designs[unit % designs.length]!
    const points = draw(design, random)
    const instrument = unit % 3 === 0 ? { gainPpm: 3, offsetV: 2e-6 } : null
    for (const method of methods) take(fitPoints(design, points, { method, instrument }))
    const first = computeCodes(design, points, { applied: 'neutral', instrument })
    take(first)
    if (first.trim.codes === null) continue
    const next = draw(design, random)
    take(computeCodes(design, next, { applied: first.trim.codes, learned: first, instrument }))
    const told = next.map((point) => (point.readings ? point : { ...point, uncertainty: 1e-6 }))
    take(verifyPoints(design, told, { instrument }))
  }
  return { digest: (hash >>> 0).toString(16), results }
}

function draw(design: Design, random: ReturnType<typeof seededRandom>): MeasuredPoint[] {
  const { lowV, highV } = design.ranges[0]!
  const { bits } = design.converter
  const lsb = (highV - lowV) / 2 ** bits
  const even = (size: number) => (2 * random.next() - 1) * size
  const [offset, gain] = [even(20 * lsb), even(300e-6)]
  const kind = random.below(3)
  const n = 2 + random.below(7)
  return Array.from({ length: n }, (_, i) => {
    const code = Math.floor(
      ((2 ** bits - 1) * (i + 0.5 * random.next() * (i > 0 && i < n - 1 ? 1 : 0))) / (n - 1),
    )
    const x = lowV + Math.min(code, 2 ** bits - 1) * lsb
    const at = () => x + offset + gain * x + even(0.3 * lsb)
    if (kind === 0) return { code: Math.min(code, 2 ** bits - 1), measured: at() }
    if (kind === 1)
      return {
        code: Math.min(code, 2 ** bits - 1),
        measured: at(),
        uncertainty: lsb * (0.05 + 0.1 * random.next()),
      }
    return { code: Math.min(code, 2 ** bits - 1), readings: Array.from({ length: 2 + random.below(5) }, at) }
  })
}
