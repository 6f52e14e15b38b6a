import { method } from '../../shared/contract/primitives.ts'
import { fitPoints } from '../../shared/solver/fit.ts'
import type { FitDocument, Method } from '../../shared/solver/types.ts'
import { type Command, type Context, everyFormat, type Given } from '../command.ts'
import { readDesign } from '../design-file.ts'
import { fitRows } from '../fit-rows.ts'
import { readMeasurement } from '../measurement.ts'
import { designFileOption, pointsAbout, pointsOption, rangeOption } from '../measurement-options.ts'
import { oneOf, text } from '../option-values.ts'
import { print } from '../output.ts'
import { pairs } from '../table.ts'

type Options = { design: string; points: string; range: string | undefined; method: Method | undefined }

export const fitCommand: Command<Options> = {
  about: pointsAbout,
  options: [
    designFileOption,
    pointsOption,
    rangeOption,
    { flags: '--method <method>', says: "how to fit (default: the design's)", choices: method.options },
  ],
  formats: everyFormat,
  examples: [
    {
      run: 'ogee fit --design design.json --points points.csv --method minimax',
      says: 'Offset and gain error by the line with the smallest peak residual.',
    },
  ],
  read: readFit,
  run: fit,
}

function readFit({ options }: Given): Options {
  const asked = text(options.method)
  return {
    design: text(options.design) ?? '',
    points: text(options.points) ?? '',
    range: text(options.range),
    method: asked === undefined ? undefined : oneOf('--method', asked, method.options),
  }
}

async function fit(options: Options, context: Context): Promise<number> {
  const design = await readDesign(context.io, options.design)
  const measured = await readMeasurement(context.io, options.points, { range: options.range })
  const document = fitPoints(design, measured.points, { rangeId: measured.range, method: options.method })
  await print(
    {
      json: document,
      table: () => pairs([['Range', document.range], ...fitRows(document.fit)]),
      csv: { heads: csvHeads, rows: [csvRow(document)] },
    },
    context,
  )
  return 0
}

const csvHeads = [
  'range',
  'method',
  'n',
  'offset_error_v',
  'gain_error_ppm',
  'full_scale_error_v',
  'u_offset_v',
  'u_gain_ppm',
  'linearity_lsb',
  'flags',
]

function csvRow({ range, fit }: FitDocument) {
  return [
    range,
    fit.method,
    fit.n,
    fit.offsetErrorV,
    fit.gainErrorPpm,
    fit.fullScaleErrorV,
    fit.expandedUncertainty?.offsetV,
    fit.expandedUncertainty?.gainPpm,
    fit.linearity.maxLsb,
    fit.flags.map(({ flag }) => flag).join(' '),
  ]
}
