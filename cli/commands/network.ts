import { sizeExit } from '../../shared/contract/exit.ts'
import { OgeeError } from '../../shared/errors.ts'
import { parseQuantityAsync } from '../../shared/quantity/parse.ts'
import type { NetworkCandidate, NetworkResult } from '../../shared/solver/network-synthesis/request.ts'
import { allSeries, type Series } from '../../shared/solver/network-synthesis/series.ts'
import { synthesiseNetwork } from '../../shared/solver/network-synthesis/synthesise.ts'
import { sizeDesign } from '../../shared/solver/sizing/size.ts'
import type { Network, Which } from '../../shared/solver/types.ts'
import { loadArithmetic } from '../arithmetic.ts'
import { type Command, type Context, everyFormat, type Given } from '../command.ts'
import { readDesign } from '../design-file.ts'
import { designFileOption, rangeOption } from '../measurement-options.ts'
import { oneOf, text } from '../option-values.ts'
import { print } from '../output.ts'
import { decimals, prefixed, volts } from '../quantities.ts'
import { pairs, textTable } from '../table.ts'

type Options = {
  design: string
  range: string | undefined
  adjuster: Which
  series: Series
  tolerance: string | undefined
  maxSource: string | undefined
  maxCurrent: string | undefined
}

/** The tolerances that IEC 60063 has the series for. */
const usualTolerance: Readonly<Record<Series, number>> = { E24: 0.05, E96: 0.01, E192: 0.005 }
const whiches = ['gain', 'offset'] as const

export const networkCommand: Command<Options> = {
  about:
    'Value sets whose reach covers what the budget needs at every corner of the tolerance, smallest step first.\n' +
    'The kind of network is the design’s; for a direct connection a divider. When nothing meets the request the\n' +
    'nearest is printed with what stands in the way, and the command ends with 10.',
  options: [
    designFileOption,
    { flags: '--adjuster <which>', says: 'whose network', required: true, choices: whiches },
    { flags: '--series <series>', says: 'preferred values of IEC 60063', required: true, choices: allSeries },
    {
      flags: '--tolerance <ratio>',
      says: 'of each resistor (default 5 % for E24, 1 % for E96, 0.5 % for E192)',
    },
    { flags: '--max-source <ohms>', says: 'limit of the source resistance, such as 5kohm' },
    { flags: '--max-current <amperes>', says: 'limit of the current from the auxiliary DAC, such as 500uA' },
    rangeOption,
  ],
  formats: everyFormat,
  examples: [
    {
      run: 'ogee network --design design.json --adjuster gain --series E96 --tolerance 0.1% --max-source 5kohm --max-current 500uA',
      says: 'Values for the divider of the gain adjuster.',
    },
  ],
  read: ({ options }: Given) => ({
    design: text(options.design) ?? '',
    range: text(options.range),
    adjuster: oneOf('--adjuster', text(options.adjuster) ?? '', whiches),
    series: oneOf('--series', text(options.series) ?? '', allSeries),
    tolerance: text(options.tolerance),
    maxSource: text(options.maxSource),
    maxCurrent: text(options.maxCurrent),
  }),
  run: network,
}

async function network(options: Options, context: Context): Promise<number> {
  const design = await readDesign(context.io, options.design)
  const { adjuster, series } = options
  const percent = await quantity('--tolerance', options.tolerance, '%')
  const size = sizeDesign(design, { rangeId: options.range }).adjusters[adjuster]
  if (size === undefined) {
    const message = `The design has no ${adjuster} adjuster, so there is no network to find.`
    throw new OgeeError('network-request', message, { errors: [{ path: `/adjusters/${adjuster}`, message }] })
  }
  const document = synthesiseNetwork(design, adjuster, {
    wantedLowV: size.requiredLowV,
    wantedHighV: size.requiredHighV,
    series,
    tolerance: percent === undefined ? usualTolerance[series] : percent / 100,
    maxSourceOhm: await quantity('--max-source', options.maxSource, 'ohm'),
    maxCurrentA: await quantity('--max-current', options.maxCurrent, 'A'),
  })
  await print(
    {
      json: document,
      table: () => networkTable(document),
      csv: { heads: csvHeads, rows: document.candidates.map(csvRow) },
    },
    context,
  )
  return document.obstacle === null ? 0 : sizeExit.short
}

async function quantity(label: string, value: string | undefined, unit: string): Promise<number | undefined> {
  return value === undefined
    ? undefined
    : (await parseQuantityAsync(value, { label, unit }, loadArithmetic)).value
}

function networkTable(document: NetworkResult): string {
  const head = pairs([
    ['Adjuster', document.adjuster],
    ['Needs at node', `${volts(document.wantedLowV)} to ${volts(document.wantedHighV)}`],
    ['Series', `${document.series}, ${decimals(document.tolerance * 100, 2)} %`],
    ...(document.obstacle === null ? [] : [['Obstacle', document.obstacle] as const]),
  ])
  const heads = [
    '',
    'R top',
    'R shift',
    'R bottom',
    'Node low',
    'Node high',
    'Corner low',
    'Corner high',
    'Step',
    'Lost bits',
    'Source',
    'DAC current',
  ]
  const nearest = document.obstacle !== null && document.candidates.length === 1
  const rows = document.candidates.map((candidate, i) => row(nearest ? 'nearest' : String(i + 1), candidate))
  if (document.own) rows.unshift(row('design', document.own))
  return `${head}\n${textTable(
    heads.map((name, i) => ({ head: name, right: i > 0 })),
    rows,
  )}`
}

function row(name: string, c: NetworkCandidate) {
  const { top, shift, bottom } = resistors(c.network)
  const ohms = (value: number | null) => (value === null ? null : prefixed(value, 'ohm'))
  return [
    name,
    ohms(top),
    ohms(shift),
    ohms(bottom),
    volts(c.nodeLowV, 4),
    volts(c.nodeHighV, 4),
    volts(c.cornerLowV, 4),
    volts(c.cornerHighV, 4),
    volts(c.stepV),
    decimals(c.lostBits, 2),
    ohms(c.sourceOhm),
    prefixed(c.dacCurrentA, 'A'),
  ]
}

function resistors(network: Network): { top: number | null; shift: number | null; bottom: number | null } {
  if (network.kind === 'direct') return { top: null, shift: null, bottom: null }
  return {
    top: network.topOhm,
    shift: network.kind === 'shifted' ? network.shiftOhm : null,
    bottom: network.bottomOhm ?? null,
  }
}

const csvHeads = [
  'top_ohm',
  'shift_ohm',
  'bottom_ohm',
  'node_low_v',
  'node_high_v',
  'corner_low_v',
  'corner_high_v',
  'step_v',
  'corner_step_v',
  'lost_bits',
  'source_ohm',
  'dac_current_a',
]

function csvRow(c: NetworkCandidate) {
  const { top, shift, bottom } = resistors(c.network)
  return [
    top,
    shift,
    bottom,
    c.nodeLowV,
    c.nodeHighV,
    c.cornerLowV,
    c.cornerHighV,
    c.stepV,
    c.cornerStepV,
    c.lostBits,
    c.sourceOhm,
    c.dacCurrentA,
  ]
}
