import { verdictExit } from '../../shared/contract/exit.ts'
import { OgeeError } from '../../shared/errors.ts'
import { computeCodes } from '../../shared/solver/codes.ts'
import { type Applied, readApplied } from '../applied.ts'
import { codesRendering } from '../codes-rendering.ts'
import { type Command, type Context, everyFormat, type Given } from '../command.ts'
import { readDesign } from '../design-file.ts'
import { readMeasurement } from '../measurement.ts'
import {
  appliedOption,
  designFileOption,
  effectsOption,
  pointsAbout,
  pointsOption,
  rangeOption,
} from '../measurement-options.ts'
import { text } from '../option-values.ts'
import { print, sayCaution } from '../output.ts'

type Options = {
  design: string
  points: string
  range: string | undefined
  applied: Applied | undefined
  /** A record or an `ogee.codes/1` of the pass before, from which the effects are learned. */
  previous: string | undefined
}

export const codesCommand: Command<Options> = {
  about: `${pointsAbout}\nNothing is recorded; \`ogee trim\` records.`,
  options: [
    designFileOption,
    pointsOption,
    rangeOption,
    appliedOption,
    effectsOption,
    {
      flags: '--previous <file>',
      says: 'result or record of the pass before, for --effects learned',
      completes: 'file',
    },
  ],
  formats: everyFormat,
  examples: [
    {
      run: 'ogee codes --design design.json --points points.csv',
      says: 'Codes of a unit with nothing loaded.',
    },
    {
      run: 'ogee codes --design design.json --points points.csv --applied gain=2593,offset=2048 --format json',
      says: 'A second pass, measured with the first codes loaded.',
    },
  ],
  read: readCodes,
  run: codes,
}

function readCodes({ options }: Given): Options {
  const applied = text(options.applied)
  const previous = text(options.previous)
  const isLearned = options.effects === 'learned'
  if (isLearned !== (previous !== undefined)) {
    throw new OgeeError(
      'usage',
      '--effects learned and --previous go together: the one learns from the other.',
    )
  }
  return {
    design: text(options.design) ?? '',
    points: text(options.points) ?? '',
    range: text(options.range),
    applied: applied === undefined ? undefined : readApplied(applied),
    previous,
  }
}

async function codes(options: Options, context: Context): Promise<number> {
  const { io } = context
  const design = await readDesign(io, options.design)
  const measured = await readMeasurement(io, options.points, options)
  const document = computeCodes(design, measured.points, {
    rangeId: measured.range,
    applied: measured.applied,
    sharedPoints: measured.otherRanges,
    ...(options.previous ? { learned: await previousPass(options.previous) } : {}),
  })
  await print(codesRendering(document, design.target.residual), context)
  if (document.trim.codes) sayCaution(context)
  return verdictExit[document.trim.verdict]
}

/** Loaded only when asked for: it brings the schemas of results with it. */
async function previousPass(path: string) {
  const { readPrevious } = await import('../previous.ts')
  return await readPrevious(path)
}
