import type { SizeResult, SizingDesign } from '../solver/sizing/types.ts'
import type { Which } from '../solver/types.ts'
import { explainAdjuster } from './explain-adjuster.ts'
import { explainResidualLine } from './explain-residual.ts'
import { type Explanation, gum, handbook, input, own } from './explanation.ts'
import { volts } from './words.ts'

/**
 * The formula in plain words, the inputs and the source of one number of `ogee.size/1`.
 * @param path JSON pointer into the result, such as `/adjusters/gain/requiredBits`
 * @returns null for a path that is no number of the result
 * @example explainSize(unipolar18, size, '/adjusters/gain/spareBits')?.inputs.length // 2
 */
export function explainSize(design: SizingDesign, result: SizeResult, path: string): Explanation | null {
  const parts = path.split('/').slice(1)
  const [head = '', second = '', third = ''] = parts
  if (head === 'adjusters' && (second === 'gain' || second === 'offset')) {
    return explainAdjuster(design, result, second, parts.slice(2).join('/'))
  }
  if (head === 'extents') return explainExtents(design, result, second, third)
  if (head === 'residual' && second === 'lines') {
    const line = result.residual.lines[Number(third)]
    return line === undefined ? null : explainResidualLine(design, result, line, parts[3] ?? '')
  }
  if (head === 'residual') return explainResidual(result, second)
  if (head === 'passes') return explainPasses(design, result, second)
  return explainHead(design, result, head)
}

function explainHead(design: SizingDesign, result: SizeResult, name: string): Explanation | null {
  const at = design.ranges.findIndex(({ id }) => id === result.range)
  const range = design.ranges[at]
  if (name === 'lsbV' && range) {
    return {
      formula: 'Full-scale range over 2 to the power of the bits.',
      inputs: [
        input('Range', `${volts(range.lowV)} to ${volts(range.highV)}`, `/ranges/${at}/highV`),
        input('Resolution', `${design.converter.bits} bits`, '/converter/bits'),
      ],
      source: handbook,
    }
  }
  if (name === 'targetV') {
    const { value, unit } = design.target.residual
    return {
      formula: 'The residual target in volts.',
      inputs: [
        input('Residual target', `${value} ${unit}`, '/target/residual'),
        input('LSB', volts(result.lsbV)),
      ],
      source: own,
    }
  }
  if (name !== 'margin') return null
  return {
    formula: 'The margin of the reach, as stated; a quarter when nothing is stated.',
    inputs: [input('Margin', String(result.margin), '/sizing/margin')],
    source: own,
  }
}

function explainExtents(
  design: SizingDesign,
  result: SizeResult,
  which: string,
  name: string,
): Explanation | null {
  const measured = result.extents.from === 'measured-units'
  if (which === 'toleranceFactor' || which === 'units') {
    return {
      formula:
        'Mean ± k·s of the measured units holds 99 % of all units with 95 % confidence: k = z·√(ν(1 + 1/n)/χ²).',
      inputs: [input('Units', String(result.extents.units ?? 'none'))],
      source: 'NIST/SEMATECH e-Handbook of Statistical Methods, 7.2.6.3 (Howe)',
    }
  }
  if (which !== 'gain' && which !== 'offset') return null
  const lines = (design.budget?.[which] ?? []).filter(({ when }) => when !== 'noise')
  const inputs = measured
    ? [
        input('Measured units', String(result.extents.units)),
        input('Drift lines', String(driftLines(design, which))),
      ]
    : [input('Initial and drift lines', String(lines.length), `/budget/${which}`)]
  const formula = extentFormula(name)
  if (formula === null) return null
  if (name.startsWith('used')) inputs.push(input('Reach from', result.combine, '/sizing/combine'))
  return { formula, inputs, source: name.startsWith('rss') ? gum : own }
}

function driftLines(design: SizingDesign, which: Which): number {
  return (design.budget?.[which] ?? []).filter(({ when }) => when === 'drift').length
}

function extentFormula(name: string): string | null {
  if (name.startsWith('centre')) return 'Sum of the nominal values (biases) of the lines.'
  if (name.startsWith('worstCase')) return 'Sum of the limits of the lines.'
  if (name.startsWith('rss')) {
    return 'Twice the root of the sum of squares of the standard uncertainties, at most the worst case.'
  }
  return name.startsWith('used') ? 'The sum that the sizing takes: worst case or root sum square.' : null
}

function explainResidual({ residual }: SizeResult, name: string): Explanation | null {
  const lines = input('Lines', String(residual.lines.length))
  if (name === 'atV') {
    return {
      formula: 'The end of the range where the worst-case sum is larger.',
      inputs: [lines],
      source: own,
    }
  }
  if (name.startsWith('worstCase')) {
    return {
      formula: 'Sum of the worst cases of the lines at that end.',
      inputs: [lines, input('At', volts(residual.atV))],
      source: own,
    }
  }
  if (!name.startsWith('rss')) return null
  return {
    formula:
      'Twice the root of the sum of squares of the standard uncertainties at that end, plus the biases of budget lines.',
    inputs: [lines, input('At', volts(residual.atV))],
    source: gum,
  }
}

function explainPasses(design: SizingDesign, result: SizeResult, name: string): Explanation | null {
  if (name !== 'withNominalEffect' && name !== 'withMeasuredEffect') return null
  const inputs = (['gain', 'offset'] as const).flatMap((which) => {
    const size = result.adjusters[which]
    if (size === undefined) return []
    const known = `/adjusters/${which}/effectTolerance`
    return [input(`Known to, ${which}`, `${size.effectTolerance * 100} %`, known)]
  })
  inputs.push(input('Target', volts(result.targetV), '/target/residual'))
  if (name === 'withMeasuredEffect') {
    const { noiseV } = design.measurement
    inputs.push(
      input(
        'Noise of a reading',
        noiseV === undefined ? 'none stated' : volts(noiseV),
        '/measurement/noiseV',
      ),
    )
  }
  return {
    formula:
      name === 'withNominalEffect'
        ? 'The first pass p after which tolerance to the power p, times the farthest correction at the output, plus half a step of each adjuster, is within the target.'
        : 'As with the stated effect, but from pass 2 on with the tolerance that the move of pass 1 teaches: twice its standard uncertainty.',
    inputs,
    source: own,
  }
}
