import { setImmediate } from 'node:timers/promises'
import { startYield, YIELD_TRIALS_MAX } from '../../shared/solver/yield/simulate.ts'
import type { PassYield, YieldResult } from '../../shared/solver/yield/types.ts'
import { type Command, type Context, everyFormat, type Given } from '../command.ts'
import { readDesign } from '../design-file.ts'
import { designFileOption, rangeOption } from '../measurement-options.ts'
import { oneOf, text, wholeNumber } from '../option-values.ts'
import { print } from '../output.ts'
import { decimals, lsb } from '../quantities.ts'
import { pairs, textTable } from '../table.ts'

type Options = {
  design: string
  range: string | undefined
  trials: number
  seed: number
  passes: number
  effects: 'design' | 'learned'
}

const sources = ['design', 'learned'] as const

export const yieldCommand: Command<Options> = {
  about:
    'Draws units from the budget, measures them by the plan, trims them with the same fit and codes as\n' +
    '`ogee codes`, and judges the true remaining error against the tolerance of the decision part. The same\n' +
    'seed gives the same numbers on every machine.',
  options: [
    designFileOption,
    rangeOption,
    { flags: '--trials <count>', says: 'how many units (default 100000)' },
    { flags: '--seed <number>', says: 'where the random numbers start (default 1)' },
    { flags: '--passes <count>', says: 'trims of each unit, 1 to 9 (default 2)' },
    {
      flags: '--effects <source>',
      says: 'from pass 2 on: effects of the design, or learned from the pass before (default design)',
      choices: sources,
    },
  ],
  formats: everyFormat,
  examples: [
    { run: 'ogee yield --design design.json --trials 20000', says: 'Yield after one and after two passes.' },
    {
      run: 'ogee yield --design design.json --trials 5000 --seed 7 --passes 3 --effects learned --format csv',
      says: 'With the effects learned from the first move.',
    },
  ],
  read: ({ options }: Given) => ({
    design: text(options.design) ?? '',
    range: text(options.range),
    trials: wholeNumber('--trials', text(options.trials) ?? '100000', 1, YIELD_TRIALS_MAX),
    seed: wholeNumber('--seed', text(options.seed) ?? '1', 0, Number.MAX_SAFE_INTEGER),
    passes: wholeNumber('--passes', text(options.passes) ?? '2', 1, 9),
    effects: oneOf('--effects', text(options.effects) ?? 'design', sources),
  }),
  run: simulate,
}

/** Units between two looks at signals and the clock. */
const block = 2_000

async function simulate(options: Options, context: Context): Promise<number> {
  const { io } = context
  const design = await readDesign(io, options.design)
  const { trials, seed, passes, effects, range } = options
  const run = startYield(design, { trials, seed, passes, effects, rangeId: range })
  let said = io.now()
  while (!run.step(block)) {
    // Lets Ctrl-C in.
    await setImmediate()
    if (io.stderrIsTerminal && io.now() - said >= 1000) {
      said = io.now()
      io.say(`Simulating, ${run.done} of ${trials}.`)
    }
  }
  const document = run.result()
  await print(
    {
      json: document,
      lines: document.passes,
      table: () => yieldTable(document),
      csv: { heads: csvHeads, rows: document.passes.map(csvRow) },
    },
    context,
  )
  return 0
}

function yieldTable({
  range,
  trials,
  seed,
  effects,
  toleranceLsb,
  passes,
  remainingLsb,
}: YieldResult): string {
  const share = (ratio: number) => `${decimals(ratio * 100, 2)} %`
  const heads = ['Pass', 'Yield', '95 % interval', 'Out of reach', 'Too coarse', 'Failing']
  return [
    pairs([
      ['Range', range],
      ['Units', `${trials}, seed ${seed}`],
      ['Effects', effects],
      ['Tolerance', lsb(toleranceLsb)],
    ]),
    textTable(
      heads.map((head) => ({ head, right: true })),
      passes.map((pass) => [
        pass.pass,
        share(pass.yield),
        `${share(pass.low95)} to ${share(pass.high95)}`,
        share(pass.outOfReach),
        share(pass.tooCoarse),
        share(pass.failing),
      ]),
    ),
    textTable(
      ['Share of units', 'Remaining at most'].map((head) => ({ head, right: true })),
      remainingLsb.quantiles.map(({ probability, lsb: value }) => [
        `${decimals(probability * 100, 1)} %`,
        value === null ? null : lsb(value),
      ]),
    ),
  ].join('\n')
}

const csvHeads = ['pass', 'yield', 'low95', 'high95', 'out_of_reach', 'too_coarse', 'failing']

function csvRow(pass: PassYield) {
  return [pass.pass, pass.yield, pass.low95, pass.high95, pass.outOfReach, pass.tooCoarse, pass.failing]
}
