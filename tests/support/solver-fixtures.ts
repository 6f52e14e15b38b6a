import { readFileSync } from 'node:fs'
import { join } from 'node:path'
import { parsePointsCsv } from '../../shared/points/parse-csv.ts'
import type { Design, MeasuredPoint } from '../../shared/solver/types.ts'

/** Designs, points and published data for the solver's tests, read from tests/vectors. */
const vectors = join(import.meta.dirname, '..', 'vectors')

export function vectorText(name: string): string {
  return readFileSync(join(vectors, name), 'utf8')
}

export function vector<T>(name: string): T {
  return JSON.parse(vectorText(name)) as T
}

export const exampleNames = ['unipolar-18', 'bipolar-16', 'out-of-reach'] as const
export type ExampleName = (typeof exampleNames)[number]

export function exampleDesign(name: ExampleName): Design {
  return vector<Design>(`examples/${name}.design.json`)
}

export function examplePoints(name: ExampleName): MeasuredPoint[] {
  return parsePointsCsv(vectorText(`examples/${name}.points.csv`)).groups[0]!.points
}

type DesignChange = {
  bits?: number
  lowV?: number
  highV?: number
  inlLsb?: number
  measurement?: Design['measurement']
  adjusters?: Design['adjusters']
  targetLsb?: number
  range?: Partial<Design['ranges'][number]>
  decision?: Design['decision']
}

/** A 16-bit 0 V to 10 V design with a gain and an offset adjuster of 8 bits; any part can be replaced. */
export function plainDesign(change: DesignChange = {}): Design {
  const source = { bits: 8, coding: 'offset-binary', lowV: -1, highV: 1 } as const
  return {
    converter: { bits: change.bits ?? 16, coding: 'straight-binary', inlLsb: change.inlLsb ?? 1 },
    ranges: [{ id: 'r', lowV: change.lowV ?? 0, highV: change.highV ?? 10, ...change.range }],
    adjusters: change.adjusters ?? {
      gain: {
        effect: { kind: 'measured', slopePerV: 0.002, offsetPerV: 0 },
        effectTolerance: 0.2,
        node: { nominalV: 0 },
        source,
        network: { kind: 'direct' },
      },
      offset: {
        effect: { kind: 'measured', slopePerV: 0, offsetPerV: 0.01 },
        effectTolerance: 0.2,
        node: { nominalV: 0 },
        source,
        network: { kind: 'direct' },
      },
    },
    target: { residual: { value: change.targetLsb ?? 1, unit: 'LSB' } },
    measurement: change.measurement ?? {},
    decision: change.decision,
  }
}

/** Points of a channel with a known line and given deviations in LSB: y = x + O + G·(x - L) + d. */
export function pointsOnLine(
  design: Design,
  codes: readonly number[],
  offsetV: number,
  gain: number,
  deviationsLsb: readonly number[] = [],
): MeasuredPoint[] {
  const { lowV, highV } = design.ranges[0]!
  const lsb = (highV - lowV) / 2 ** design.converter.bits
  return codes.map((code, i) => {
    const x = lowV + code * lsb
    return { code, measured: x + offsetV + gain * (x - lowV) + (deviationsLsb[i] ?? 0) * lsb }
  })
}
