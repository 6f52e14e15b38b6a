import type { Io } from './io.ts'

/** What a subcommand is made of. Options are read (pure, tested alone) before anything is executed. */

export type Format = 'table' | 'json' | 'csv' | 'ndjson'
export const everyFormat: readonly Format[] = ['table', 'json', 'csv', 'ndjson']

export type OptionSpec = {
  /** As commander takes them: `--design <key>`. */
  flags: string
  says: string
  choices?: readonly string[]
  required?: boolean
  /** What shell completion offers for the value. */
  completes?: 'file' | 'folder'
}

export type ArgumentSpec = { name: string; says: string; choices?: readonly string[] }

/** A command line that works as it stands in a folder with the files of the examples; a test runs each. */
export type Example = { run: string; says: string }

/** What stood on the command line, before it means anything. */
export type Given = {
  args: readonly string[]
  /** A flag that may stand more than once (`<file...>`) gives a list. */
  options: Readonly<Record<string, string | boolean | readonly string[] | undefined>>
}

export type Context = {
  io: Io
  format: Format
  /** The whole command tree, for the one command that prints it. */
  tree: readonly Entry[]
}

/** `read` turns arguments to options or throws `usage`; `run` executes and gives the verdict's exit code. */
export type Command<Options = unknown> = {
  arguments?: readonly ArgumentSpec[]
  options: readonly OptionSpec[]
  examples: readonly Example[]
  /** Longer words for the help text, below the summary. */
  about?: string
  /** The formats offered; empty when the command prints one thing only. The first is for pipes, unless `table`. */
  formats: readonly Format[]
  read(given: Given): Options
  run(options: Options, context: Context): Promise<number>
}

/** A place in the command tree. Commands are loaded one at a time, so that a quick one starts quickly. */
export type Leaf = {
  name: string
  summary: string
  load: () => Promise<Command>
  /** Reads so many documents that compiling parsers for them pays. */
  longLived?: boolean
}
export type Noun = { name: string; summary: string; verbs: readonly Leaf[] }
export type Entry = Leaf | Noun

/** Table on a terminal, otherwise what programs read. */
export function defaultFormat(formats: readonly Format[], stdoutIsTerminal: boolean): Format {
  const forPrograms = formats.find((format) => format !== 'table') ?? 'json'
  return stdoutIsTerminal && formats.includes('table') ? 'table' : forPrograms
}
