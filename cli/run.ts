import { CommanderError } from 'commander'
import { OgeeError } from '../shared/errors.ts'
import { type Command, defaultFormat, type Entry, everyFormat, type Format, type Leaf } from './command.ts'
import { commandTable } from './command-table.ts'
import type { Io } from './io.ts'
import { buildProgram, type Chosen } from './program.ts'
import { formatAskedFor, sayTrouble, toTrouble } from './trouble.ts'

/** Runs one command line and gives its exit code. Never throws: trouble becomes words and a code here. */
export async function runCommandLine(argv: readonly string[], io: Io): Promise<number> {
  const asked = formatAskedFor(argv, io.stdoutIsTerminal)
  try {
    const parsed = await parse(commandTable, argv)
    if ('text' in parsed) {
      await io.write(parsed.text)
      return 0
    }
    const { command, args, options } = parsed
    const format = formatOf(command, options.format, io.stdoutIsTerminal)
    const read = command.read({ args, options })
    return await command.run(read, { io, format, tree: commandTable })
  } catch (thrown) {
    const trouble = toTrouble(thrown)
    sayTrouble(trouble, io, asked)
    return trouble.exit
  }
}

/** A command line as the command that it names and what it was given, or as a text to print (help, version). */
export async function parse(
  tree: readonly Entry[],
  argv: readonly string[],
): Promise<Chosen | { text: string }> {
  const loaded = new Map<Leaf, Command>()
  const leaves = namedLeaves(tree, argv)
  if (leaves.some(({ longLived }) => !longLived)) await import('./zod-config.ts')
  for (const leaf of leaves) loaded.set(leaf, await leaf.load())
  let chosen: Chosen | undefined
  let text = ''
  const program = buildProgram(
    tree,
    loaded,
    (found) => {
      chosen = found
    },
    (piece) => {
      text += piece
    },
  )
  try {
    await program.parseAsync(helpAsFlag(argv), { from: 'user' })
  } catch (error) {
    if (!(error instanceof CommanderError)) throw error
    if (error.exitCode !== 0) throw usage(error, argv)
  }
  if (chosen) refuseMissing(chosen)
  return chosen ?? { text }
}

/** `help design pull` as `design pull --help`: commander's own help command knows one word only. */
function helpAsFlag(argv: readonly string[]): string[] {
  return argv[0] === 'help' && argv.length > 1 ? [...argv.slice(1), '--help'] : [...argv]
}

function refuseMissing({ command, options }: Chosen): void {
  for (const { flags, required } of command.options) {
    const name = /--([a-z-]+)/.exec(flags)?.[1] ?? flags
    const key = name.replaceAll(/-([a-z])/g, (_, letter: string) => letter.toUpperCase())
    if (required && options[key] === undefined)
      throw new OgeeError('usage', `The option '${flags}' is missing.`)
  }
}

/** The commands that the words before any option name: `ogee help design pull` names one too. */
function namedLeaves(tree: readonly Entry[], argv: readonly string[]): Leaf[] {
  const words = argv.filter((word) => !word.startsWith('-') && word !== 'help')
  const entry = tree.find(({ name }) => name === words[0])
  if (!entry) return []
  if (!('verbs' in entry)) return [entry]
  return entry.verbs.filter(({ name }) => name === words[1])
}

function usage(error: CommanderError, argv: readonly string[]): OgeeError {
  if (error.code === 'commander.help') {
    const path = argv.filter((word) => !word.startsWith('-'))
    return new OgeeError('usage', `Name a command: \`ogee ${['help', ...path].join(' ')}\` lists them.`)
  }
  const [first = '', suggestion] = error.message.replace(/^error: /, '').split('\n')
  const sentence = `${first.charAt(0).toUpperCase()}${first.slice(1)}`.replace(/([^.?])$/, '$1.')
  return new OgeeError(
    'usage',
    suggestion ? `${sentence} ${suggestion.replace(/^\((.*)\)$/, '$1')}` : sentence,
  )
}

function formatOf(command: Command, given: unknown, stdoutIsTerminal: boolean): Format {
  const asked = everyFormat.find((format) => format === given)
  if (asked || command.formats.length > 0) return asked ?? defaultFormat(command.formats, stdoutIsTerminal)
  return stdoutIsTerminal ? 'table' : 'json'
}
