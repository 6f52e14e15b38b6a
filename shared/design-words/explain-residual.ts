import type { ResidualLine, SizeResult, SizingDesign } from '../solver/sizing/types.ts'
import { type Explanation, gum, input, own } from './explanation.ts'
import { volts } from './words.ts'

const worst: Readonly<Record<ResidualLine['kind'], string>> = {
  quantising: 'Half a step of the auxiliary DAC, at the output.',
  'auxiliary-inl': 'INL of the auxiliary DAC in steps, times its step at the output.',
  'auxiliary-drift':
    'Drift of the auxiliary DAC per kelvin over its whole span, times the temperature span, at the output.',
  measurement:
    'Twice the standard uncertainty that the plan of measurement leaves in the fitted line at that end.',
  instrument: 'Limit of the instrument at that output.',
  'converter-inl': 'INL limit of the converter.',
  budget: 'Limit of the budget line at that output, plus the size of its nominal value.',
  'not-trimmed': 'What the one adjuster leaves of the errors that it is trimmed on.',
}

const standard: Readonly<Record<ResidualLine['kind'], string>> = {
  quantising: 'A step at the output over the root of 12.',
  'auxiliary-inl': 'The limit over the root of 3 (rectangular).',
  'auxiliary-drift': 'The limit over the root of 3 (rectangular).',
  measurement:
    'Standard uncertainty of the fitted line at that end, from the noise and the readings of the plan.',
  instrument: 'The limit over the root of 3 (rectangular).',
  'converter-inl': 'The limit over the root of 3 (rectangular).',
  budget: 'The limit by the line’s distribution.',
  'not-trimmed': 'Root of the sum of squares of what is left of each line.',
}

/** The explanation of one number of a residual line. */
export function explainResidualLine(
  design: SizingDesign,
  { residual }: SizeResult,
  line: ResidualLine,
  name: string,
): Explanation | null {
  const inputs = [
    input(line.name, volts(line.worstV), fieldOf(design, line)),
    input('At', volts(residual.atV)),
  ]
  if (name === 'standardV') return { formula: standard[line.kind], inputs, source: gum }
  if (name === 'worstV') return { formula: worst[line.kind], inputs, source: own }
  if (name === 'worstLsb' || name === 'worstPpm') {
    const unit = name === 'worstLsb' ? 'LSB' : 'ppm of FSR'
    return { formula: `${worst[line.kind]} In ${unit}.`, inputs, source: own }
  }
  if (name === 'share') {
    return {
      formula: 'Its worst case over the sum of all.',
      inputs: [...inputs, input('Sum', volts(residual.worstCaseV))],
      source: own,
    }
  }
  if (name === 'biasV') return { formula: 'Size of the nominal value at that output.', inputs, source: own }
  return null
}

/** Where a person would change the line. */
function fieldOf(design: SizingDesign, line: ResidualLine): string | null {
  const way = line.path === 'neither' ? 'gain' : line.path
  switch (line.kind) {
    case 'budget': {
      const at = (design.budget?.[way] ?? []).findIndex(({ name }) => name === line.name)
      return at < 0 ? null : `/budget/${way}/${at}`
    }
    case 'quantising':
      return `/adjusters/${way}/source/bits`
    case 'auxiliary-inl':
      return `/adjusters/${way}/source/inlLsb`
    case 'auxiliary-drift':
      return `/adjusters/${way}/source/driftPpmPerK`
    case 'converter-inl':
      return '/converter/inlLsb'
    case 'measurement':
      return '/measurement/noiseV'
    case 'instrument':
      return '/measurement/instrument'
    case 'not-trimmed':
      return '/adjusters'
  }
}
