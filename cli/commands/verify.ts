import { verdictExit } from '../../shared/contract/exit.ts'
import { verifyPoints } from '../../shared/solver/verify.ts'
import { type Command, type Context, everyFormat, type Given } from '../command.ts'
import { readDesign } from '../design-file.ts'
import { readMeasurement } from '../measurement.ts'
import { designFileOption, pointsAbout, pointsOption, rangeOption } from '../measurement-options.ts'
import { text } from '../option-values.ts'
import { print } from '../output.ts'
import { verifyRendering } from '../verify-rendering.ts'

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
  await print(verifyRendering(document, design.decision?.tolerance), context)
  return verdictExit[document.outcome]
}
