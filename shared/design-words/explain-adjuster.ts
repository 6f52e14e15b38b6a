import type { AdjusterSize, SizeResult, SizingDesign } from '../solver/sizing/types.ts'
import type { Which } from '../solver/types.ts'
import { type Explanation, type ExplanationInput, input, own } from './explanation.ts'
import { bitsWord, span, volts } from './words.ts'

type Name =
  | 'needed'
  | 'tolerance'
  | 'margin'
  | 'effect'
  | 'target'
  | 'step'
  | 'part'
  | 'node'
  | 'nominal'
  | 'budget'

const network = 'Millman’s theorem; solver, section 7'

/** Formula in plain words and the names of its inputs, by the number's path below the adjuster. */
const table: Readonly<Record<string, { formula: string; from: readonly Name[]; source?: string }>> = {
  requiredLowV: {
    formula: 'Nominal plus the centre less the reach with margin, widened by how well the effect is known.',
    from: ['budget', 'margin', 'tolerance', 'effect', 'nominal'],
  },
  requiredHighV: {
    formula: 'Nominal plus the centre plus the reach with margin, widened by how well the effect is known.',
    from: ['budget', 'margin', 'tolerance', 'effect', 'nominal'],
  },
  requiredStepV: {
    formula: 'Twice the target, shared equally among the adjusters, over the effect at the output.',
    from: ['target', 'effect'],
  },
  requiredBits: {
    formula: 'The smallest number of bits whose steps of the allowed size span the needed reach.',
    from: ['needed', 'step'],
  },
  'recommended/bits': {
    formula: 'The even resolution from 8 to 20 bits that is enough.',
    from: ['needed', 'step'],
  },
  'recommended/lowV': { formula: 'The low end of the needed reach, at the node.', from: ['needed'] },
  'recommended/highV': {
    formula:
      'The voltage that code 2 to the power of the bits would give, so that the last code reaches the need.',
    from: ['needed'],
  },
  'available/bits': { formula: 'The auxiliary DAC of the design.', from: ['part'] },
  'available/lowV': {
    formula:
      'Lowest code through the network, less the span’s tolerance, or the node’s limit, whichever comes first.',
    from: ['part', 'node'],
    source: network,
  },
  'available/highV': {
    formula:
      'Highest code through the network, less the span’s tolerance, or the node’s limit, whichever comes first.',
    from: ['part', 'node'],
    source: network,
  },
  'available/stepV': {
    formula: 'Span of the auxiliary DAC over 2 to the power of its bits, through the network.',
    from: ['part'],
    source: network,
  },
  'available/outputStepV': {
    formula: 'Step at the node times the effect at the output.',
    from: ['part', 'effect'],
  },
  reachMargin: {
    formula: 'Available over needed reach, less 1, on the tighter side.',
    from: ['part', 'needed'],
  },
  stepMargin: { formula: 'Allowed over available step.', from: ['step', 'part'] },
  spareBits: { formula: 'Whole doublings in the step margin.', from: ['step', 'part'] },
  reachSpareBits: { formula: 'Doublings between needed and available reach.', from: ['needed', 'part'] },
  stepSpareBits: { formula: 'Doublings between available and allowed step.', from: ['step', 'part'] },
  nominalV: { formula: 'The node’s voltage with nothing loaded.', from: ['nominal'] },
  outputPerV: {
    formula: 'Volts at the output per volt at the node, where it is largest over the range.',
    from: ['effect'],
    source: 'Solver, section 4: circuit of a summing amplifier',
  },
  centreV: { formula: 'The move that takes out the biases of the budget.', from: ['budget', 'effect'] },
  reachBeforeMarginV: {
    formula: 'The move that takes out the error extents, to either side.',
    from: ['budget', 'effect'],
  },
  requiredReachOutputV: {
    formula: 'Needed reach on the tighter side times the effect.',
    from: ['needed', 'effect'],
  },
  availableReachOutputV: {
    formula: 'Available reach on the tighter side times the effect.',
    from: ['part', 'effect'],
  },
  effectTolerance: { formula: 'How well the effect is known, as stated.', from: ['tolerance'] },
}

/** The explanation of one number of an adjuster, by its path below the adjuster. */
export function explainAdjuster(
  design: SizingDesign,
  result: SizeResult,
  which: Which,
  name: string,
): Explanation | null {
  const size = result.adjusters[which]
  const entry = Object.hasOwn(table, name) ? table[name] : undefined
  if (size === undefined || entry === undefined) return null
  const inputs = inputsOf(design, result, which, size)
  return {
    formula: entry.formula,
    inputs: entry.from.map((key) => inputs[key]),
    source: entry.source ?? own,
  }
}

function inputsOf(
  design: SizingDesign,
  result: SizeResult,
  which: Which,
  size: AdjusterSize,
): Record<Name, ExplanationInput> {
  const at = `/adjusters/${which}`
  const adjuster = design.adjusters[which]
  const { source, node } = adjuster!
  const extents = result.extents
  const budget =
    which === 'gain' ? `±${extents.gain.usedPpm.toPrecision(3)} ppm` : `±${volts(extents.offset.usedV)}`
  return {
    needed: input('Needed reach at the node', span(size.requiredLowV, size.requiredHighV)),
    tolerance: input('Known to', `${size.effectTolerance * 100} %`, `${at}/effectTolerance`),
    margin: input('Margin', `${result.margin * 100} %`, '/sizing/margin'),
    effect: input('Effect at the output', `${size.outputPerV.toPrecision(3)} V/V`, `${at}/effect`),
    target: input('Target', volts(result.targetV), '/target/residual'),
    step: input('Allowed step at the node', volts(size.requiredStepV)),
    part: input(
      'Auxiliary DAC',
      `${bitsWord(source.bits)}, ${span(source.lowV, source.highV)}`,
      `${at}/source`,
    ),
    node: input('Node limits', `${limit(node.minV)} to ${limit(node.maxV)}`, `${at}/node`),
    nominal: input('Node nominal', volts(size.nominalV), `${at}/node/nominalV`),
    budget: input('Error extents', budget, `/budget/${which}`),
  }
}

const limit = (value: number | undefined): string => (value === undefined ? 'none' : volts(value))
