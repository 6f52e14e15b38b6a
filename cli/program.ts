import { Command as Commander, Option } from 'commander'
import type { Command, Entry, Leaf, Noun, OptionSpec } from './command.ts'
import { version } from './version.ts'

/** Builds commander's tree from ours: help, suggestions and parsing are commander's. */

export type Chosen = {
  command: Command
  args: string[]
  options: Record<string, string | boolean | readonly string[] | undefined>
}
type OnChosen = (chosen: Chosen) => void
type Output = (text: string) => void

const overview = `
Examples:
  ogee codes --design design.json --points points.csv   codes for one unit, offline
  ogee trim --design DBS-A --unit 031 --points -        the same from standard input, recorded
  ogee help trim                                        everything about one command

Results go to standard output, everything else to standard error. The exit code is 0 when all is good,
10 to 20 for a unit that is not, 64 and over when something went wrong.
`

/**
 * The program with every command by name, and those commands in full that stand in `loaded`. Only the chosen one has to
 * be loaded to parse a command line; all of them to write completion.
 */
export function buildProgram(
  tree: readonly Entry[],
  loaded: ReadonlyMap<Leaf, Command>,
  onChosen: OnChosen,
  print: Output,
): Commander {
  const program = quiet(new Commander('ogee'), print)
    .description('Plans and runs the trimming of precision digital-to-analog converter channels.')
    .version(version, '-V, --version', 'print the version')
    .helpOption('-h, --help', 'print help')
    .addHelpText('after', overview)
    .usage('<command> [options]')
  for (const entry of tree) {
    program.addCommand(
      'verbs' in entry
        ? nounOf(entry, loaded, onChosen, print)
        : leafOf(entry, loaded.get(entry), onChosen, print),
    )
  }
  return program
}

function nounOf(
  noun: Noun,
  loaded: ReadonlyMap<Leaf, Command>,
  onChosen: OnChosen,
  print: Output,
): Commander {
  const made = quiet(new Commander(noun.name), print).summary(noun.summary).description(`${noun.summary}.`)
  for (const verb of noun.verbs) made.addCommand(leafOf(verb, loaded.get(verb), onChosen, print))
  return made
}

function leafOf(leaf: Leaf, command: Command | undefined, onChosen: OnChosen, print: Output): Commander {
  const made = quiet(new Commander(leaf.name), print).summary(leaf.summary)
  if (!command) return made
  made.description(`${leaf.summary}.${command.about ? `\n\n${command.about}` : ''}`)
  for (const { name, says } of command.arguments ?? []) made.argument(name, says)
  for (const spec of optionsOf(command)) made.addOption(commanderOption(spec))
  made.addHelpText('after', examplesText(command))
  made.action(() => onChosen({ command, args: made.args, options: made.opts() }))
  return made
}

/** What the command itself takes, and what every command takes. */
export function optionsOf(command: Command): readonly OptionSpec[] {
  if (command.formats.length === 0) return command.options
  return [
    ...command.options,
    { flags: '--format <format>', says: formatSays(command), choices: command.formats },
  ]
}

function formatSays({ formats }: Command): string {
  const forPrograms = formats.find((format) => format !== 'table')
  return formats.includes('table')
    ? `how to print (table on a terminal, ${forPrograms} elsewhere)`
    : 'how to print'
}

/** What is required is checked after parsing: a misspelt flag is to be told by its name, not by the one now missing. */
function commanderOption({ flags, says, choices, required }: OptionSpec): Option {
  const option = new Option(flags, required ? `${says} (required)` : says)
  return choices ? option.choices([...choices]) : option
}

function examplesText({ examples }: Command): string {
  const lines = examples.map(({ run, says }) => `  ${run}\n      ${says}`)
  return `\n${examples.length === 1 ? 'Example' : 'Examples'}:\n${lines.join('\n')}\n`
}

/** Commander must neither print errors nor end the process: both are done in one place of ours. */
function quiet(command: Commander, print: Output): Commander {
  return command
    .exitOverride()
    .configureOutput({ writeOut: print, writeErr: () => undefined, outputError: () => undefined })
    .configureHelp({ sortSubcommands: false, helpWidth: 100 })
    .showSuggestionAfterError(true)
}
