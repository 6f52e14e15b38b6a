import { describe, expect, test } from 'vitest'
import { converterRange } from '../../../shared/solver/converter.ts'
import { effectOf } from '../../../shared/solver/effects.ts'
import { nodeMap, nodeV } from '../../../shared/solver/network.ts'
import type { Adjuster, Effect, Network } from '../../../shared/solver/types.ts'
import { exampleDesign, plainDesign, vector } from '../../support/solver-fixtures.ts'

type Circuits = {
  loaded_divider: Record<'V' | 'R1' | 'R2' | 'Rin' | 'V_decimal' | 'unloaded_V' | 'Rth', string>[]
  summing_node: Record<'V1' | 'V2' | 'R1' | 'R2' | 'R3' | 'V_decimal' | 'output_resistance', string>[]
}
const circuits = vector<Circuits>('divider-summing.json')
const fraction = (text: string) => {
  const [top = '', bottom = '1'] = text.split('/')
  return Number(top) / Number(bottom)
}

/** An adjuster whose code 0 is the given voltage. */
const driven = (volts: number, network: Network, node: Partial<Adjuster['node']> = {}): Adjuster => ({
  effect: { kind: 'measured', slopePerV: 1, offsetPerV: 0 },
  node: { nominalV: 0, ...node },
  source: { bits: 12, coding: 'straight-binary', lowV: volts, highV: volts + 4096 },
  network,
})

describe('network', () => {
  test('loaded dividers (divider-summing.json)', () => {
    for (const c of circuits.loaded_divider) {
      const network: Network = { kind: 'divider', topOhm: Number(c.R1), bottomOhm: Number(c.R2) }
      const loaded = nodeMap(driven(Number(c.V), network, { inputOhm: Number(c.Rin) }), 'gain')
      expect(nodeV(loaded, 0)).toBeCloseTo(Number(c.V_decimal), 14)
      expect(loaded.sourceOhm).toBeCloseTo(Number(c.Rth), 9)
      expect(nodeMap(driven(Number(c.V), network), 'gain').v0).toBeCloseTo(fraction(c.unloaded_V), 14)
    }
  })

  test('summing nodes (divider-summing.json), and one volt more at the DAC moves the node by its weight', () => {
    for (const c of circuits.summing_node) {
      const network: Network = {
        kind: 'shifted',
        topOhm: Number(c.R1),
        shiftOhm: Number(c.R2),
        shiftV: fraction(c.V2),
        bottomOhm: Number(c.R3),
      }
      const map = nodeMap(driven(fraction(c.V1), network), 'gain')
      expect(map.v0).toBeCloseTo(Number(c.V_decimal), 13)
      expect(map.sourceOhm).toBeCloseTo(fraction(c.output_resistance), 9)
      expect(map.stepV).toBeCloseTo(map.sourceOhm / Number(c.R1), 13)
      // The same with the resistor to ground as the node's own input.
      const { bottomOhm, ...open } = network
      const loaded = nodeMap(driven(fraction(c.V1), open, { inputOhm: bottomOhm }), 'gain')
      expect(loaded.v0).toBeCloseTo(Number(c.V_decimal), 13)
    }
  })

  test('the input resistance returns to returnV; direct ignores it', () => {
    const network: Network = { kind: 'divider', topOhm: 1000, bottomOhm: 1000 }
    const returned = nodeMap(driven(0, network, { inputOhm: 500, returnV: 4 }), 'gain')
    expect(returned.v0).toBeCloseTo(2, 14)
    expect(nodeMap(driven(3, { kind: 'direct' }, { inputOhm: 500, returnV: 4 }), 'gain')).toMatchObject({
      v0: 3,
      stepV: 1,
      sourceOhm: 0,
    })
  })

  test('reach of the worked examples: node voltages at the end codes', () => {
    for (const name of ['unipolar-18', 'bipolar-16'] as const) {
      const size = vector<{
        size: Record<
          'gain' | 'offset',
          { availableLowV: number; availableHighV: number; availableStepV: number }
        >
      }>(`examples/${name}.expected.json`).size
      for (const which of ['gain', 'offset'] as const) {
        const map = nodeMap(exampleDesign(name).adjusters[which]!, which)
        expect(nodeV(map, 0)).toBeCloseTo(size[which].availableLowV, 13)
        expect(nodeV(map, map.count - 1)).toBeCloseTo(size[which].availableHighV, 13)
        expect(map.stepV).toBeCloseTo(size[which].availableStepV, 15)
      }
    }
  })

  test('the DAC’s current is the largest |V_aux - V|/R_t over the codes', () => {
    const map = nodeMap(exampleDesign('unipolar-18').adjusters.gain!, 'gain')
    expect(map.dacCurrentA).toBeCloseTo((2.5 - 0.36721647950050723) / 8660, 12)
  })
})

describe('effects from circuit values', () => {
  const of = (effect: Effect, lowV = 0) =>
    effectOf(
      driven(0, { kind: 'direct' }),
      { id: 'r', lowV, highV: 10, effects: { gain: effect } },
      converterRange(plainDesign({ lowV, range: { offsetAt: 'low-end' } })),
      'gain',
    )
  const reference = { kind: 'reference-summing', inputOhm: 10000, adjustOhm: 820000, referenceV: 5 } as const

  test('reference-summing: β = ±(R_1/R_a)/V_ref, α = β·(x0 - pivot)', () => {
    expect(of({ ...reference, inverting: true })).toEqual({ slopePerV: -10000 / 820000 / 5, offsetPerV: 0 })
    const { slopePerV, offsetPerV } = of({ ...reference, inverting: false, pivotV: 2 }, -10)
    expect(slopePerV).toBe(10000 / 820000 / 5)
    expect(offsetPerV).toBeCloseTo(slopePerV * -12, 15)
    expect(of({ ...reference, referenceV: -5, inverting: true }).slopePerV).toBeGreaterThan(0)
  })

  test('output-summing: α = ±R_f/R_a, β = 0', () => {
    const summing = { kind: 'output-summing', feedbackOhm: 10000, adjustOhm: 1e6 } as const
    expect(of({ ...summing, inverting: true })).toEqual({ offsetPerV: -0.01, slopePerV: 0 })
    expect(of({ ...summing, inverting: false })).toEqual({ offsetPerV: 0.01, slopePerV: 0 })
  })

  test('a range’s own effect goes before the adjuster’s', () => {
    const range = converterRange(plainDesign())
    expect(effectOf(driven(0, { kind: 'direct' }), undefined, range, 'gain').slopePerV).toBe(1)
    expect(of({ kind: 'measured', slopePerV: 7, offsetPerV: 0 }).slopePerV).toBe(7)
  })
})
