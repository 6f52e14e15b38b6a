import type { Command, Entry, Leaf, OptionSpec } from './command.ts'
import { optionsOf } from './program.ts'

/** Completion scripts, generated from the command tree, so that no command and no flag can be missing. */

export type Shell = 'bash' | 'zsh' | 'fish'
export const shells: readonly Shell[] = ['bash', 'zsh', 'fish']

/** A place on the command line: the words so far, what may stand next, and the options there. */
type Place = {
  words: readonly string[]
  next: readonly { name: string; summary: string }[]
  options: readonly OptionSpec[]
}

export async function completionScript(tree: readonly Entry[], shell: Shell): Promise<string> {
  const places = await placesOf(tree)
  switch (shell) {
    case 'bash':
      return bash(places)
    case 'zsh':
      return `#compdef ogee\nautoload -Uz bashcompinit && bashcompinit\n${bash(places)}`
    case 'fish':
      return fish(places)
  }
}

async function placesOf(tree: readonly Entry[]): Promise<Place[]> {
  const help = { name: 'help', summary: 'Everything about one command' }
  const version = [{ flags: '-V, --version', says: 'print the version' }, helpOption]
  const places: Place[] = [
    { words: [], next: [...tree, help], options: version },
    { words: ['help'], next: tree, options: [] },
  ]
  for (const entry of tree) {
    if (!('verbs' in entry)) places.push(await leafPlace([entry.name], entry))
    else {
      places.push({ words: [entry.name], next: entry.verbs, options: [helpOption] })
      for (const verb of entry.verbs) places.push(await leafPlace([entry.name, verb.name], verb))
    }
  }
  return places
}

const helpOption: OptionSpec = { flags: '-h, --help', says: 'print help' }

async function leafPlace(words: readonly string[], leaf: Leaf): Promise<Place> {
  const command: Command = await leaf.load()
  const next = (command.arguments?.[0]?.choices ?? []).map((name) => ({ name, summary: '' }))
  return { words, next, options: [...optionsOf(command), helpOption] }
}

const longFlag = ({ flags }: OptionSpec) => /--[a-z-]+/.exec(flags)?.[0] ?? flags
const takesValue = ({ flags }: OptionSpec) => flags.includes('<')

function bash(places: readonly Place[]): string {
  const known = places.filter(({ words }) => words.length > 0).map(({ words }) => `'${words.join(' ')}'`)
  const values = places.flatMap(({ words, options }) =>
    options
      .filter(takesValue)
      .map((option) => `    '${words.join(' ')} ${longFlag(option)}') ${bashValue(option)}; return ;;`),
  )
  const next = places.map(({ words, next, options }) => {
    const offered = [...next.map(({ name }) => name), ...options.map(longFlag)].join(' ')
    return `    '${words.join(' ')}') COMPREPLY=($(compgen -W '${offered}' -- "$cur")) ;;`
  })
  return `_ogee() {
  local cur="\${COMP_WORDS[COMP_CWORD]}" prev="\${COMP_WORDS[COMP_CWORD-1]}" place='' longer i
  COMPREPLY=()
  for ((i = 1; i < COMP_CWORD; i++)); do
    longer="\${place:+$place }\${COMP_WORDS[i]}"
    case "$longer" in
      ${known.join('|')}) place="$longer" ;;
      *) break ;;
    esac
  done
  case "$place $prev" in
${values.join('\n')}
  esac
  case "$place" in
${next.join('\n')}
  esac
}
complete -o bashdefault -F _ogee ogee
`
}

function bashValue({ choices, completes }: OptionSpec): string {
  if (choices) return `COMPREPLY=($(compgen -W '${choices.join(' ')}' -- "$cur"))`
  if (completes === 'folder') return 'COMPREPLY=($(compgen -d -- "$cur"))'
  return completes === 'file' ? 'COMPREPLY=($(compgen -f -- "$cur"))' : ':'
}

function fish(places: readonly Place[]): string {
  const lines = places.flatMap(({ words, next, options }) => {
    const condition =
      words.length === 0
        ? '__fish_use_subcommand'
        : words.map((word) => `__fish_seen_subcommand_from ${word}`).join('; and ')
    const start = `complete -c ogee -n ${quoted(condition)}`
    return [
      ...next.map(({ name, summary }) => `${start} -f -a ${name} -d ${quoted(summary)}`),
      ...options.map((option) => `${start} ${fishOption(option)} -d ${quoted(option.says)}`),
    ]
  })
  return `${lines.join('\n')}\n`
}

function fishOption(option: OptionSpec): string {
  const short = /(?:^| )-([a-zA-Z])\b/.exec(option.flags)?.[1]
  const name = `${short ? `-s ${short} ` : ''}-l ${longFlag(option).slice(2)}`
  if (!takesValue(option)) return `-f ${name}`
  if (option.choices) return `-x ${name} -a ${quoted(option.choices.join(' '))}`
  return `${option.completes ? '-r -F' : '-x'} ${name}`
}

const quoted = (text: string) => `'${text.replaceAll('\\', '\\\\').replaceAll("'", "\\'")}'`
