import { describe, expect, test } from 'vitest'
import { networkDocument } from '../../../shared/contract/network.ts'
import { OgeeError } from '../../../shared/errors.ts'
import { cornersOf, evaluateNetwork } from '../../../shared/solver/network-synthesis/evaluate.ts'
import {
  type NetworkRequest,
  type Wanted,
  wantedOf,
} from '../../../shared/solver/network-synthesis/request.ts'
import { seriesValues } from '../../../shared/solver/network-synthesis/series.ts'
import { synthesiseNetwork } from '../../../shared/solver/network-synthesis/synthesise.ts'
import { sizeDesign } from '../../../shared/solver/sizing/size.ts'
import type { Adjuster, Network } from '../../../shared/solver/types.ts'
import { runSeed, seededRandom } from '../../support/random.ts'
import { vector } from '../../support/solver-fixtures.ts'
import { adjuster, handDesign, sizingExample } from '../sizing/designs.ts'

const request: NetworkRequest = { wantedLowV: -0.25, wantedHighV: 0.25, series: 'E24', tolerance: 0.01 }
const withPart = (change: Parameters<typeof adjuster>[0]) => ({
  adjusters: { gain: adjuster({ beta: 1e-3, ...change }) },
})
const dividerPart = withPart({
  source: { lowV: -2.5, highV: 2.5 },
  network: { kind: 'divider', topOhm: 1e4, bottomOhm: 2e3 },
})
const shiftedPart = withPart({
  source: { lowV: 0, highV: 2.5, bits: 10 },
  network: { kind: 'shifted', topOhm: 1e4, shiftOhm: 4e4, shiftV: -5, bottomOhm: 2e4 },
  node: { inputOhm: 5e5 },
})

describe('exact cases of circuit theory', () => {
  type Cases = {
    loaded_divider: { V: string; R1: string; R2: string; Rin: string; V_decimal: string; Rth: string }[]
    summing_node: { V1: string; V2: string; R1: string; R2: string; R3: string; V_decimal: string }[]
  }
  const cases = vector<Cases>('divider-summing.json')
  const evaluate = (change: Parameters<typeof adjuster>[0], network: Network) =>
    evaluateNetwork(wantedOf(withPart(change), 'gain', request), network)

  test.each(cases.loaded_divider)('loaded divider of $V V', ({ V, R1, R2, Rin, V_decimal, Rth }) => {
    // Code 2^1 would give 2V, so code 1, the last of one bit, gives V.
    const source = { bits: 1, lowV: 0, highV: 2 * Number(V) }
    const got = evaluate(
      { source, node: { inputOhm: Number(Rin) } },
      { kind: 'divider', topOhm: Number(R1), bottomOhm: Number(R2) },
    )
    expect(got.nodeHighV).toBeCloseTo(Number(V_decimal), 14)
    expect(got.sourceOhm).toBeCloseTo(Number(Rth), 10)
  })

  test.each(cases.summing_node)('summing node of $V1 V and $V2 V', ({ V1, V2, R1, R2, R3, V_decimal }) => {
    const ratio = (text: string) => Number(text.split('/')[0]) / Number(text.split('/')[1] ?? 1)
    const source = { bits: 1, lowV: 0, highV: 2 * ratio(V1) }
    const network = {
      kind: 'shifted',
      topOhm: Number(R1),
      shiftOhm: Number(R2),
      shiftV: ratio(V2),
      bottomOhm: Number(R3),
    } as const
    expect(evaluate({ source }, network).nodeHighV).toBeCloseTo(Number(V_decimal), 14)
  })
})

/** Whether reach covers at every corner, with margin on either side of rounding; worst corner step; limits. */
function judge(
  wanted: Wanted,
  network: Network,
): { covers: boolean; step: number; source: number; current: number } {
  const { cornerLowV, cornerHighV, cornerStepV, sourceOhm, dacCurrentA } = evaluateNetwork(wanted, network)
  const slack = 1e-9 * (wanted.high - wanted.low)
  return {
    covers: cornerLowV <= wanted.low + slack && cornerHighV >= wanted.high - slack,
    step: cornerStepV,
    source: sourceOhm,
    current: dacCurrentA,
  }
}

describe('against trying every value set', () => {
  const seed = runSeed()
  const random = seededRandom(seed)
  const requests = Array.from({ length: 6 }, () => ({
    wantedLowV: -0.1 - 0.3 * random.next(),
    wantedHighV: 0.1 + 0.3 * random.next(),
    series: 'E24' as const,
    tolerance: random.pick([0, 0.01, 0.05]),
    maxSourceOhm: random.pick([2e3, 2e4, undefined]),
    maxCurrentA: random.pick([4e-4, undefined]),
    count: 5,
  }))

  test.each(requests)(`dividers of E24, seed ${seed}: %o`, (asked) => {
    const wanted = wantedOf(dividerPart, 'gain', asked)
    const all: { network: Network; step: number; source: number }[] = []
    for (const topOhm of seriesValues('E24', 1e3, 1e6)) {
      for (const bottomOhm of seriesValues('E24', 10, 1e7)) {
        const network = { kind: 'divider', topOhm, bottomOhm } as const
        const { covers, step, source, current } = judge(wanted, network)
        if (
          covers &&
          source <= (asked.maxSourceOhm ?? Infinity) &&
          current <= (asked.maxCurrentA ?? Infinity)
        ) {
          all.push({ network, step, source })
        }
      }
    }
    all.sort((a, b) => (Math.abs(a.step - b.step) > 1e-11 * b.step ? a.step - b.step : a.source - b.source))
    const { candidates, obstacle } = synthesiseNetwork(dividerPart, 'gain', asked)
    if (all.length === 0) {
      expect(obstacle).not.toBe(null)
      return
    }
    expect(obstacle).toBe(null)
    expect(candidates.map(({ network }) => network)).toEqual(all.slice(0, 5).map(({ network }) => network))
  })

  test('shifted networks: no set of a sampled neighbourhood beats the first candidate', () => {
    const asked: NetworkRequest = { wantedLowV: -0.235, wantedHighV: 0.235, series: 'E24', tolerance: 0.001 }
    const { candidates } = synthesiseNetwork(shiftedPart, 'gain', asked)
    const wanted = wantedOf(shiftedPart, 'gain', asked)
    const best = candidates[0]!.cornerStepV
    expect(candidates.length).toBe(10)
    const values = seriesValues('E24', 1e3, 1e5)
    for (const topOhm of values) {
      for (const shiftOhm of values) {
        for (const bottomOhm of [...seriesValues('E24', 100, 1e5), undefined]) {
          const network = { kind: 'shifted', topOhm, shiftOhm, shiftV: -5, bottomOhm } as const
          // The cheap bound first: most sets are far off.
          const nominal = 1 / topOhm / (1 / topOhm + 1 / shiftOhm + (bottomOhm ? 1 / bottomOhm : 0) + 1 / 5e5)
          if ((nominal * 2.5) / 1024 >= best * (1 + 1e-9)) continue
          if ((nominal * 2.5 * 1023) / 1024 < 0.47 * (1 - 1e-9)) continue
          expect(judge(wanted, network).covers && judge(wanted, network).step < best * (1 - 1e-11)).toBe(
            false,
          )
        }
      }
    }
  })
})

describe('what a candidate promises', () => {
  test.each([dividerPart, shiftedPart])(
    'it covers at every corner and by sizing, and its numbers are those of its corners',
    (part) => {
      const asked: NetworkRequest = { ...request, series: 'E96', maxSourceOhm: 5e3, maxCurrentA: 5e-4 }
      const { candidates } = synthesiseNetwork(part, 'gain', asked)
      expect(candidates.length).toBe(10)
      const wanted = wantedOf(part, 'gain', asked)
      for (const candidate of candidates) {
        const spans = cornersOf(candidate.network, asked.tolerance).map((network) =>
          evaluateNetwork({ ...wanted, tolerance: 0 }, network),
        )
        expect(candidate.cornerLowV).toBe(
          Math.max(...spans.map(({ nodeLowV }) => nodeLowV), candidate.nodeLowV),
        )
        expect(candidate.cornerHighV).toBe(
          Math.min(...spans.map(({ nodeHighV }) => nodeHighV), candidate.nodeHighV),
        )
        expect(candidate.cornerLowV).toBeLessThanOrEqual(-0.25 * (1 - 2e-9))
        expect(candidate.cornerHighV).toBeGreaterThanOrEqual(0.25 * (1 - 2e-9))
        expect(candidate.sourceOhm).toBeLessThanOrEqual(5e3 * (1 + 1e-12))
        expect(candidate.dacCurrentA).toBeLessThanOrEqual(5e-4)
        expect(candidate.lostBits).toBeCloseTo(
          Math.log2((candidate.nodeHighV - candidate.nodeLowV) / 0.5),
          12,
        )
      }
    },
  )

  test('taken over into the design, the sizing says covers', () => {
    const design = sizingExample('unipolar-18')
    const { requiredLowV, requiredHighV } = sizeDesign(design).adjusters.gain!
    const { candidates } = synthesiseNetwork(design, 'gain', {
      wantedLowV: requiredLowV,
      wantedHighV: requiredHighV,
      series: 'E96',
      tolerance: 0.001,
    })
    const gain: Adjuster = { ...design.adjusters.gain!, network: candidates[0]!.network }
    const size = sizeDesign({ ...design, adjusters: { ...design.adjusters, gain } }).adjusters.gain!
    expect(size.verdict).toBe('covers')
    expect(size.reachMargin).toBeLessThan(0.01)
  })

  test('the tolerance of the span is covered too', () => {
    const loose = withPart({
      source: { lowV: -2.5, highV: 2.5, spanTolerance: 0.1 },
      network: dividerPart.adjusters.gain.network,
    })
    const { candidates } = synthesiseNetwork(loose, 'gain', request)
    for (const { cornerHighV } of candidates)
      expect(cornerHighV * 0.9).toBeGreaterThanOrEqual(0.25 * (1 - 1e-8))
  })

  test('the schema takes the answer', () => {
    const result = synthesiseNetwork(shiftedPart, 'gain', request)
    expect(networkDocument.parse(result)).toEqual(result)
  })
})

describe('what stands in the way', () => {
  const obstacleOf = (part: Parameters<typeof synthesiseNetwork>[0], change: Partial<NetworkRequest>) => {
    const result = synthesiseNetwork(part, 'gain', { ...request, ...change })
    expect(result.candidates.length).toBe(1)
    return result.obstacle
  }

  test.each([
    [
      'limits that exclude each other',
      dividerPart,
      { maxSourceOhm: 100, maxCurrentA: 1e-4 },
      'source resistance at most 100 ohm and DAC current at most 100 uA',
    ],
    [
      'a span wider than the part’s',
      dividerPart,
      { wantedLowV: -3, wantedHighV: 3 },
      'resistors do not widen a span',
    ],
    [
      'a divider from a part that starts at 0 V',
      withPart({ source: { lowV: 0, highV: 2.5 } }),
      {},
      'Take a shifted network',
    ],
    [
      'a span that only exact resistors reach',
      withPart({ source: { lowV: 0.5, highV: 1.01 } }),
      { tolerance: 0.05, wantedLowV: 0.25, wantedHighV: 0.5 },
      'at every corner',
    ],
    [
      'a shift that eats the span',
      shiftedPart,
      { wantedLowV: -1.2, wantedHighV: 1.2 },
      'takes too much of the span',
    ],
  ] as const)('%s', (_, part, change, words) => {
    expect(obstacleOf(part, change)).toContain(words)
  })

  test('a node limit inside the needed reach: values are found, and no network helps', () => {
    const limited = withPart({ source: { lowV: -2.5, highV: 2.5 }, node: { maxV: 0.1 } })
    const result = synthesiseNetwork(limited, 'gain', request)
    expect(result.obstacle).toContain('No network helps')
    expect(result.candidates.length).toBeGreaterThan(1)
  })

  const refused: [string, Parameters<typeof synthesiseNetwork>[0], Partial<NetworkRequest>, string][] = [
    ['a span reversed', dividerPart, { wantedLowV: 1, wantedHighV: -1 }, '/adjusters/gain'],
    ['a tolerance of a half', dividerPart, { tolerance: 0.5 }, '/tolerance'],
    ['a source limit of zero', dividerPart, { maxSourceOhm: 0 }, '/maxSource'],
    ['a negative current limit', dividerPart, { maxCurrentA: -1 }, '/maxCurrent'],
    [
      'a shifted network without its reference',
      dividerPart,
      { kind: 'shifted' },
      '/adjusters/gain/network/shiftV',
    ],
    ['an absent adjuster', handDesign({ adjusters: {} }), {}, '/adjusters'],
  ]
  test.each(refused)('refused: %s', (_, part, change, path) => {
    expect(() => synthesiseNetwork(part, 'gain', { ...request, ...change })).toThrow(OgeeError)
    try {
      synthesiseNetwork(part, 'gain', { ...request, ...change })
    } catch (error) {
      expect((error as OgeeError).code).toBe('network-request')
      expect((error as OgeeError).errors[0]!.path).toBe(path)
    }
  })
})
