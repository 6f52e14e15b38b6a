import { sizeExit } from '../../shared/contract/exit.ts'
import { verdictSentences, verdictWords } from '../../shared/design-words/verdict-sentences.ts'
import { sizeDesign } from '../../shared/solver/sizing/size.ts'
import type { AdjusterSize, SizeResult } from '../../shared/solver/sizing/types.ts'
import type { Adjuster, PerAdjuster } from '../../shared/solver/types.ts'
import { type Command, type Context, everyFormat, type Given } from '../command.ts'
import { readDesign } from '../design-file.ts'
import { readMeasuredUnits } from '../measured-units.ts'
import { designFileOption, rangeOption } from '../measurement-options.ts'
import { text } from '../option-values.ts'
import { print } from '../output.ts'
import { ascii, decimals, lsb, ppm, volts } from '../quantities.ts'
import { pairs, textTable } from '../table.ts'

type Options = { design: string; range: string | undefined; points: readonly string[] }

export const sizeCommand: Command<Options> = {
  about:
    'What the error budget demands of each adjuster, against what the design has. With --points the extents\n' +
    'come from measured units in the place of the initial lines (mean and spread by the tolerance factor for\n' +
    '99 % of units with 95 % confidence). Ends with 10 when short of reach, with 11 when too coarse.',
  options: [
    designFileOption,
    rangeOption,
    { flags: '--points <file...>', says: 'points CSV of measured units, two or more', completes: 'file' },
  ],
  formats: everyFormat,
  examples: [
    {
      run: 'ogee size --design design.json',
      says: 'Bits, reach and step of both adjusters, and the residual.',
    },
    {
      run: 'ogee size --design design.json --range u10 --format csv',
      says: 'The same for one of several ranges, a row an adjuster.',
    },
  ],
  read: ({ options }: Given) => ({
    design: text(options.design) ?? '',
    range: text(options.range),
    points: Array.isArray(options.points) ? options.points : [],
  }),
  run: size,
}

async function size(options: Options, context: Context): Promise<number> {
  const design = await readDesign(context.io, options.design)
  const { points, range } = options
  const measuredUnits =
    points.length === 0 ? undefined : await readMeasuredUnits(context.io, points, design, range)
  const document = sizeDesign(design, { rangeId: range, measuredUnits })
  await print(
    {
      json: document,
      table: () => sizeTable(design, document),
      csv: { heads: csvHeads, rows: presentOf(document).map(([which, adjuster]) => csvRow(which, adjuster)) },
    },
    context,
  )
  return sizeExit[document.verdict]
}

function presentOf({ adjusters }: SizeResult): ['gain' | 'offset', AdjusterSize][] {
  return (['gain', 'offset'] as const).flatMap((which): ['gain' | 'offset', AdjusterSize][] => {
    const adjuster = adjusters[which]
    return adjuster ? [[which, adjuster]] : []
  })
}

function sizeTable(design: { adjusters: PerAdjuster<Adjuster> }, document: SizeResult): string {
  const { residual, passes, extents } = document
  const sentences = verdictSentences(design, document).map(
    ({ headline, plain, remedy }): [string, string] => [
      headline,
      ascii(remedy === null ? plain : `${plain} ${remedy}`),
    ],
  )
  const limits: [string, string][] = [
    ['Range', document.range],
    ['Target', `${volts(document.targetV)}, ${lsb(document.targetV / document.lsbV)}`],
    ['Gain extent', `${ppm(extents.gain.centrePpm)} ± ${ppm(extents.gain.usedPpm)}`],
    ['Offset extent', `${volts(extents.offset.centreV)} ± ${volts(extents.offset.usedV)}`],
  ]
  const end: [string, string][] = [
    ['Passes, effect as stated', passText(passes.withNominalEffect)],
    ['Passes, effect learned', passText(passes.withMeasuredEffect)],
    ...document.remarks.map(({ path, message }): [string, string] => [path, message]),
  ]
  return [pairs(sentences), pairs(limits), demandTable(document), residualTable(residual), pairs(end)].join(
    '\n',
  )
}

const passText = (passes: number | null) => (passes === null ? 'over 9' : String(passes))

function demandTable(document: SizeResult): string {
  return textTable(
    ['', 'Needs', 'Bits', 'Step allowed', 'Has', 'Bits', 'Step', 'Reach', 'Step margin', 'Verdict'].map(
      (head, i) => ({
        head,
        right: i > 0 && i < 9,
      }),
    ),
    presentOf(document).map(([which, a]) => [
      which,
      `${volts(a.requiredLowV)} to ${volts(a.requiredHighV)}`,
      a.requiredBits,
      volts(a.requiredStepV),
      `${volts(a.available.lowV)} to ${volts(a.available.highV)}`,
      a.available.bits,
      volts(a.available.stepV),
      a.reachSpareBits === null ? null : `${decimals(a.reachSpareBits, 2)} bits`,
      `${decimals(a.stepSpareBits, 2)} bits`,
      verdictWords[a.verdict],
    ]),
  )
}

/** The largest dozen; a budget may hold ten thousand. */
const shownLines = 12

function residualTable(residual: SizeResult['residual']): string {
  const rest = residual.lines.slice(shownLines)
  const sum = (pick: 'worstV' | 'worstLsb' | 'worstPpm') =>
    rest.reduce((total, line) => total + line[pick], 0)
  const rows = residual.lines
    .slice(0, shownLines)
    .map((line) => [line.name, volts(line.worstV), decimals(line.worstLsb, 3), decimals(line.worstPpm, 3)])
  if (rest.length > 0) {
    const name = `${rest.length} smaller lines`
    rows.push([name, volts(sum('worstV')), decimals(sum('worstLsb'), 3), decimals(sum('worstPpm'), 3)])
  }
  rows.push(
    [
      'Worst case, sum',
      volts(residual.worstCaseV),
      decimals(residual.worstCaseLsb, 3),
      decimals(residual.worstCasePpm, 3),
    ],
    ['Root sum square', volts(residual.rssV), decimals(residual.rssLsb, 3), decimals(residual.rssPpm, 3)],
  )
  const heads = [`Residual at ${volts(residual.atV, 5)}`, 'Worst', 'LSB', 'ppm']
  return textTable(
    heads.map((head, i) => ({ head, right: i > 0 })),
    rows,
  )
}

const csvHeads = [
  'adjuster',
  'verdict',
  'required_low_v',
  'required_high_v',
  'required_step_v',
  'required_bits',
  'available_low_v',
  'available_high_v',
  'available_step_v',
  'available_bits',
  'reach_margin',
  'step_margin',
  'spare_bits',
]

function csvRow(which: string, a: AdjusterSize) {
  return [
    which,
    a.verdict,
    a.requiredLowV,
    a.requiredHighV,
    a.requiredStepV,
    a.requiredBits,
    a.available.lowV,
    a.available.highV,
    a.available.stepV,
    a.available.bits,
    a.reachMargin,
    a.stepMargin,
    a.spareBits,
  ]
}
