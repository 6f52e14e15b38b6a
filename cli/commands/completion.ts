import type { Command, Context, Given } from '../command.ts'
import { completionScript, type Shell, shells } from '../completion.ts'
import { oneOf } from '../option-values.ts'

type Options = { shell: Shell }

export const completionCommand: Command<Options> = {
  about:
    'bash: put  source <(ogee completion bash)  into ~/.bashrc.\n' +
    'zsh:  put  source <(ogee completion zsh)  into ~/.zshrc, after compinit.\n' +
    'fish: write it to ~/.config/fish/completions/ogee.fish.',
  arguments: [{ name: '<shell>', says: shells.join(', '), choices: shells }],
  options: [],
  formats: [],
  examples: [{ run: 'ogee completion bash', says: 'The script for bash.' }],
  read: ({ args }: Given) => ({ shell: oneOf('completion', args[0] ?? '', shells) }),
  run: printScript,
}

async function printScript({ shell }: Options, { io, tree }: Context): Promise<number> {
  await io.write(await completionScript(tree, shell))
  return 0
}
