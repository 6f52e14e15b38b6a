import type { Options } from './cells.tsx'
import type { FormDoc, Which } from './form-doc.ts'
import { codings, effectKinds, networkKinds, rangeEffectKinds, signs } from './words.ts'

/** One question to an adjuster: a text, or one of a list. */
export type Asking = {
  name: string
  label: string
  /** Where two labels share a row. */
  short?: string
  options?: Options
  placeholder?: string
}
/** A row of the table: what it asks each adjuster; the two may be asked different things in the same place. */
export type AskingRow = Readonly<Record<Which, Asking | null>>

const ask = (name: string, label: string, more: Partial<Asking> = {}): Asking => ({ name, label, ...more })

const kindOf = ask('effect', 'Effect', { options: effectKinds })
const kindHere = ask('effect', 'Effect here', { options: rangeEffectKinds })
const effectRows: Readonly<Record<string, readonly Asking[]>> = {
  none: [],
  measured: [
    ask('slope', 'Slope', { placeholder: '0 /V' }),
    ask('offsetPerV', 'Offset per V', { placeholder: '0' }),
  ],
  'output-summing': [
    ask('feedback', 'R feedback', { short: 'R f', placeholder: '10 kohm' }),
    ask('adjust', 'R adjust', { short: 'R a', placeholder: '1 Mohm' }),
    ask('sign', 'Sign', { options: signs }),
  ],
  'reference-summing': [
    ask('inputR', 'R input', { short: 'R in', placeholder: '10 kohm' }),
    ask('adjust', 'R adjust', { short: 'R a', placeholder: '820 kohm' }),
    ask('reference', 'Reference', { placeholder: '5 V' }),
    ask('sign', 'Sign', { options: signs }),
    ask('pivot', 'Pivot', { placeholder: '0 V' }),
  ],
}
const networkRows: Readonly<Record<string, readonly Asking[]>> = {
  direct: [],
  divider: [ask('rs', 'R top, R bottom', { placeholder: '8.2k / 1.5k' })],
  shifted: [
    ask('rs3', 'R top, shift, bottom', { placeholder: '10k / 40.2k / 20k' }),
    ask('shift', 'Shift to', { placeholder: '-5 V' }),
  ],
}
const node: readonly Asking[] = [
  ask('known', 'Known to', { placeholder: '0 %' }),
  ask('nominal', 'Node nominal', { placeholder: '0 V' }),
  ask('limits', 'Node limits'),
  ask('nodeInput', 'Node input'),
  ask('return', 'Node return', { placeholder: '0 V' }),
  ask('network', 'Network', { options: networkKinds }),
]
const source: readonly Asking[] = [
  ask('bits', 'Auxiliary DAC', { placeholder: '12 bits' }),
  ask('coding', 'Coding', { options: codings }),
  ask('span', 'Span', { placeholder: '-2.5 V to 2.5 V' }),
  ask('spanTolerance', 'Span tolerance'),
  ask('inlDrift', 'INL, drift'),
]

/** The rows of both adjusters in the order of the signal path, one under the kind of effect. */
export function adjusterRows({ values }: FormDoc): AskingRow[] {
  const kind = (which: Which) => values[`${which}.effect`] ?? 'none'
  const has = (which: Which) => kind(which) !== 'none'
  const network = (which: Which) => (has(which) ? (values[`${which}.network`] ?? 'direct') : 'direct')
  return [
    { gain: kindOf, offset: kindOf },
    ...pair((which) => effectRows[kind(which)] ?? []),
    ...pair((which) => (has(which) ? node : [])),
    ...pair((which) => networkRows[network(which)] ?? []),
    ...pair((which) => (has(which) ? source : [])),
  ]
}

/** The rows of what the adjusters do in one range alone. */
export function rangeEffectRows(kinds: Readonly<Record<Which, string>>): AskingRow[] {
  return [{ gain: kindHere, offset: kindHere }, ...pair((which) => effectRows[kinds[which]] ?? [])]
}

function pair(of: (which: Which) => readonly Asking[]): AskingRow[] {
  const [gain, offset] = [of('gain'), of('offset')]
  return Array.from({ length: Math.max(gain.length, offset.length) }, (_, i) => ({
    gain: gain[i] ?? null,
    offset: offset[i] ?? null,
  }))
}

export function rowLabel({ gain, offset }: AskingRow): string {
  if (gain && offset && gain.label !== offset.label)
    return `${gain.short ?? gain.label}, ${offset.short ?? offset.label}`
  return gain?.label ?? offset?.label ?? ''
}
