import { verdictExit } from '../../shared/contract/exit.ts'
import type { LimitWithUnit, VerifyResult } from '../../shared/solver/types.ts'
import { verifyPoints } from '../../shared/solver/verify.ts'
import { type Command, type Context, everyFormat, type Given } from '../command.ts'
import { readDesign } from '../design-file.ts'
import { readMeasurement } from '../measurement.ts'
import { designFileOption, pointsAbout, pointsOption, rangeOption } from '../measurement-options.ts'
import { print, type Rendering, verdictText } from '../output.ts'
import { decimals, lsb, percent, volts } from '../quantities.ts'
import { text } from '../server-options.ts'
import { pairs, textTable } from '../table.ts'

type Options = { design: string; points: string; range: string | undefined }

export const verifyCommand: Command<Options> = {
  about: pointsAbout,
  options: [designFileOption, pointsOption, rangeOption],
  formats: everyFormat,
  examples: [
    {
      run: 'ogee verify --design design.json --points as-left.csv',
      says: 'Points measured with the codes loaded, against the tolerance of the design.',
    },
  ],
  read: ({ options }: Given) => ({
    design: text(options.design) ?? '',
    points: text(options.points) ?? '',
    range: text(options.range),
  }),
  run: verify,
}

async function verify(options: Options, context: Context): Promise<number> {
  const design = await readDesign(context.io, options.design)
  const measured = await readMeasurement(context.io, options.points, options)
  const document = verifyPoints(design, measured.points, { rangeId: measured.range })
  await print(rendering(document, design.decision?.tolerance), context)
  return verdictExit[document.outcome]
}

function rendering(document: VerifyResult, tolerance: LimitWithUnit | undefined): Rendering {
  const { points, worst, outcome, rule, tur, range, toleranceV } = document
  const asked = tolerance && tolerance.unit !== 'V' ? `, ${tolerance.value} ${tolerance.unit}` : ''
  return {
    json: document,
    lines: points,
    table: (colour) =>
      `${pairs([
        ['Range', range],
        ['Outcome', verdictText(outcome, colour)],
        ['Rule', rule],
        ['Tolerance', `${volts(toleranceV)}${asked}`],
        ['Worst', `${volts(worst.errorV)}, ${lsb(worst.errorLsb)} at code ${worst.code}`],
        ['TUR', tur === null ? '–' : decimals(tur, 1)],
      ])}\n${textTable(
        ['Code', 'Ideal V', 'Measured V', 'Error LSB', 'U', 'Conforms', 'Outcome'].map((head, i) => ({
          head,
          right: i < 6,
        })),
        points.map((point) => [
          point.code,
          decimals(point.idealV, 7),
          decimals(point.measuredV, 7),
          decimals(point.errorLsb, 3),
          point.expandedUncertaintyV === null ? null : volts(point.expandedUncertaintyV),
          point.conformanceProbability === null ? null : percent(point.conformanceProbability),
          point.outcome,
        ]),
      )}`,
    csv: {
      heads: ['code', 'ideal_v', 'measured_v', 'error_v', 'error_lsb', 'u_v', 'outcome', 'conformance'],
      rows: points.map((point) => [
        point.code,
        point.idealV,
        point.measuredV,
        point.errorV,
        point.errorLsb,
        point.expandedUncertaintyV,
        point.outcome,
        point.conformanceProbability,
      ]),
    },
  }
}
