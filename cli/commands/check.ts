import { type Command, everyFormat } from '../command.ts'
import { effectsOption, pointsAbout, pointsOption } from '../measurement-options.ts'
import { type OneOptions, readOne, recordOne } from '../record-one.ts'
import { serverAbout, serverOptions } from '../server-options.ts'
import { unitOptions } from '../unit-options.ts'

export const checkCommand: Command<OneOptions> = {
  about:
    'Measure with the codes loaded. Without --follows it goes on from the last record of the unit, and without\n' +
    '--applied the codes of that record count as loaded. Ends with 0 for pass, 14 conditional pass, 15 conditional\n' +
    `fail, 13 fail. The same command again doubles nothing.\n${pointsAbout}\n\n${serverAbout}`,
  // A verification computes no codes, so there is nothing to learn effects for.
  options: [...unitOptions.filter((option) => option !== effectsOption), pointsOption, ...serverOptions],
  formats: everyFormat,
  examples: [
    {
      run: 'ogee check --design DBS-A --unit 031 --channel 1 --points as-left.csv',
      says: 'Records the points as left and judges them against the tolerance of the design.',
    },
  ],
  read: readOne,
  run: (options, context) => recordOne(options, 'verify', context),
}
