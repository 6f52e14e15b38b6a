import { type Command, everyFormat } from '../command.ts'
import { pointsAbout, pointsOption } from '../measurement-options.ts'
import { type OneOptions, readOne, recordOne } from '../record-one.ts'
import { serverAbout, serverOptions } from '../server-options.ts'
import { unitOptions } from '../unit-options.ts'

export const trimCommand: Command<OneOptions> = {
  about:
    'The same command again doubles nothing: the answer then carries the notice replayed. To record\n' +
    `an identical measurement once more give --measured-at or --key.\n${pointsAbout}\n\n${serverAbout}`,
  options: [...unitOptions, pointsOption, ...serverOptions],
  formats: everyFormat,
  examples: [
    {
      run: 'ogee trim --design DBS-A --unit 031 --channel 1 --applied neutral --points points.csv',
      says: 'Records the points of unit 031 and prints the record with its codes.',
    },
    {
      run: 'ogee trim --design DBS-A --unit 031 --channel 1 --applied neutral --points points.csv --dry-run',
      says: 'The same numbers; nothing is recorded.',
    },
  ],
  read: readOne,
  run: (options, context) => recordOne(options, 'trim', context),
}
