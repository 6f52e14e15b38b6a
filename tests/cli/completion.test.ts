import { spawn } from 'node:child_process'
import { describe, expect, test } from 'vitest'
import { commandTable } from '../../cli/command-table.ts'
import { builtCli, ended } from './support/built-cli.ts'

const cli = builtCli()
const places = commandTable.flatMap((entry) =>
  'verbs' in entry ? [entry.name, ...entry.verbs.map(({ name }) => `${entry.name} ${name}`)] : [entry.name],
)
const scripts = new Map<string, string>()
const script = async (shell: string) => {
  const text = scripts.get(shell) ?? (await cli.run(['completion', shell])).stdout
  scripts.set(shell, text)
  return text
}

/** Flags as the help text shows them, which is commander's own rendering of the tree. */
async function flagsOf(place: string): Promise<string[]> {
  const { stdout } = await cli.run([...place.split(' '), '--help'])
  return stdout.split('\n').flatMap((row) => /^ {2}(?:-\w, )?(--[a-z-]+)/.exec(row)?.[1] ?? [])
}

async function complete(words: readonly string[]): Promise<string[]> {
  const quoted = ['ogee', ...words].map((word) => `'${word}'`).join(' ')
  const command = `${await script('bash')}\nCOMP_WORDS=(${quoted}); COMP_CWORD=${words.length}; _ogee; printf '%s\\n' "\${COMPREPLY[@]}"`
  const { stdout, stderr } = await ended(spawn('bash', ['--norc', '-c', command], { cwd: cli.folder }))
  expect(stderr).toBe('')
  return stdout.split('\n').filter((word) => word !== '')
}

describe('L6: completion', () => {
  test('bash offers every command', async () => {
    expect(await complete([''])).toEqual(expect.arrayContaining(commandTable.map(({ name }) => name)))
    expect(await complete(['ver'])).toEqual(['verify'])
    expect(await complete(['design', ''])).toEqual(expect.arrayContaining(['list', 'show', 'pull']))
  })

  test.each(places)('every flag of %s, in bash, zsh and fish', async (place) => {
    const flags = await flagsOf(place)
    expect(flags).toContain('--help')
    expect(new Set(await complete([...place.split(' '), '--']))).toEqual(new Set(flags))
    const zsh = await script('zsh')
    expect(zsh).toContain('#compdef ogee')
    expect(zsh).toContain(await script('bash'))
    const condition = place
      .split(' ')
      .map((word) => `__fish_seen_subcommand_from ${word}`)
      .join('; and ')
    const fish = (await script('fish')).split('\n').filter((row) => row.includes(`-n '${condition}'`))
    for (const flag of flags) {
      expect(fish.some((row) => row.includes(` -l ${flag.slice(2)} `))).toBe(true)
    }
  })

  test('values: choices, files, words of an argument', async () => {
    expect(await complete(['codes', '--format', ''])).toEqual(['table', 'json', 'csv', 'ndjson'])
    expect(await complete(['fit', '--method', 'm'])).toEqual(['minimax'])
    expect(await complete(['codes', '--design', 'b'])).toEqual(['bin'])
    expect(await complete(['completion', ''])).toEqual(expect.arrayContaining(['bash', 'zsh', 'fish']))
    expect(await complete(['codes', '--range', ''])).toEqual([])
  })
})
