import type { SizingDesign } from '../../../shared/solver/sizing/types.ts'
import type { Adjuster } from '../../../shared/solver/types.ts'
import { type ExampleName, exampleDesign } from '../../support/solver-fixtures.ts'

/** Designs for the tests of sizing, networks and yield. */

export function sizingExample(name: ExampleName): SizingDesign {
  return exampleDesign(name) as SizingDesign
}

type AdjusterChange = Omit<Partial<Adjuster>, 'source' | 'node'> & {
  alpha?: number
  beta?: number
  source?: Partial<Adjuster['source']>
  node?: Partial<Adjuster['node']>
}

/** An adjuster with a measured effect and a 12-bit ±1 V auxiliary DAC wired straight to a node at 0 V. */
export function adjuster({ alpha = 0, beta = 0, source, node, ...rest }: AdjusterChange): Adjuster {
  return {
    effect: { kind: 'measured', offsetPerV: alpha, slopePerV: beta },
    effectTolerance: 0,
    network: { kind: 'direct' },
    ...rest,
    node: { nominalV: 0, ...node },
    source: { bits: 12, coding: 'offset-binary', lowV: -1, highV: 1, ...source },
  }
}

/**
 * 16 bits, 0 V to 10 V, target 1 LSB, margin 0, worst case: whole numbers to reckon with by hand. Gain 1e-3 /V, offset
 * 1e-2 V/V.
 */
export function handDesign(change: Partial<SizingDesign> = {}): SizingDesign {
  return {
    converter: { bits: 16, coding: 'straight-binary' },
    ranges: [{ id: 'r', lowV: 0, highV: 10 }],
    adjusters: { gain: adjuster({ beta: 1e-3 }), offset: adjuster({ alpha: 1e-2 }) },
    budget: {
      gain: [{ name: 'G', limitPpm: 100, distribution: 'rectangular', when: 'initial' }],
      offset: [{ name: 'O', limitV: 1e-3, distribution: 'rectangular', when: 'initial' }],
    },
    sizing: { combine: 'worst-case', margin: 0, temperatureSpanK: 0 },
    target: { residual: { value: 1, unit: 'LSB' } },
    measurement: { method: 'best-fit', points: [0, 16384, 32768, 49152, 65535] },
    decision: { rule: 'simple', tolerance: { value: 1, unit: 'LSB' } },
    ...change,
  }
}
