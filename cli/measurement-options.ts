import type { OptionSpec } from './command.ts'

/** Flags that several commands share, said the same way everywhere. */

export const designFileOption: OptionSpec = {
  flags: '--design <file>',
  says: 'design document',
  required: true,
  completes: 'file',
}

export const pointsOption: OptionSpec = {
  flags: '--points <file>',
  says: 'points CSV, or - for standard input',
  required: true,
  completes: 'file',
}

export const rangeOption: OptionSpec = {
  flags: '--range <id>',
  says: 'range, where the design has several',
}

export const appliedOption: OptionSpec = {
  flags: '--applied <codes>',
  says: 'codes loaded while measuring: neutral, or gain=K,offset=K',
}

export const effectsOption: OptionSpec = {
  flags: '--effects <source>',
  says: 'effects of the adjusters: of the design, or learned from the pass before',
  choices: ['design', 'learned'],
}

export const pointsAbout =
  'The points CSV has a header row. It needs measured or readings (;-separated), and code, word or\n' +
  'target; bare numbers are volts, and quantities such as 4998.9783 mV are taken.'
