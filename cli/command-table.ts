import type { Entry } from './command.ts'

/** Every subcommand, in the order of the help text. Help, suggestions and completion are made from this table. */
export const commandTable: readonly Entry[] = [
  {
    name: 'codes',
    summary: 'Trim codes from measured points, offline',
    load: async () => (await import('./commands/codes.ts')).codesCommand,
  },
  {
    name: 'fit',
    summary: 'Offset and gain error of measured points, offline',
    load: async () => (await import('./commands/fit.ts')).fitCommand,
  },
  {
    name: 'verify',
    summary: 'As-left points against the tolerance, offline',
    load: async () => (await import('./commands/verify.ts')).verifyCommand,
  },
  {
    name: 'size',
    summary: 'Reach, step and bits that a design needs, offline',
    load: async () => (await import('./commands/size.ts')).sizeCommand,
  },
  {
    name: 'network',
    summary: 'Resistor values between the auxiliary DAC and the adjust node, offline',
    load: async () => (await import('./commands/network.ts')).networkCommand,
  },
  {
    name: 'yield',
    summary: 'Yield of a design by simulation, offline',
    load: async () => (await import('./commands/yield.ts')).yieldCommand,
  },
  {
    name: 'simulate',
    summary: 'Points of simulated units, repeatable from a seed',
    load: async () => (await import('./commands/simulate.ts')).simulateCommand,
  },
  {
    name: 'trim',
    summary: 'Record a measurement and get its trim codes',
    load: async () => (await import('./commands/trim.ts')).trimCommand,
  },
  {
    name: 'check',
    summary: 'Record a verification with the codes loaded',
    load: async () => (await import('./commands/check.ts')).checkCommand,
  },
  {
    name: 'batch',
    summary: 'Record many units of a file or a pipe',
    load: async () => (await import('./commands/batch.ts')).batchCommand,
    longLived: true,
  },
  {
    name: 'pipe',
    summary: 'Answer one JSON object a line, for as long as lines come',
    load: async () => (await import('./commands/pipe.ts')).pipeCommand,
    longLived: true,
  },
  {
    name: 'unit',
    summary: 'Current codes of a unit and the record they come from',
    load: async () => (await import('./commands/unit.ts')).unitCommand,
  },
  {
    name: 'spool',
    summary: 'Measurements put down while the server was away',
    verbs: [
      {
        name: 'list',
        summary: 'What waits, what was sent, what was refused',
        load: async () => (await import('./commands/spool/list.ts')).spoolListCommand,
      },
      {
        name: 'send',
        summary: 'Send what waits, in order, and let go of what is proven to be in the ledger',
        load: async () => (await import('./commands/spool/send.ts')).spoolSendCommand,
      },
    ],
  },
  {
    name: 'history',
    summary: 'Records, newest first',
    load: async () => (await import('./commands/history.ts')).historyCommand,
  },
  {
    name: 'lot',
    summary: 'Lots: open, look, close, codes of every unit',
    verbs: [
      {
        name: 'open',
        summary: 'Open a lot of a released revision',
        load: async () => (await import('./commands/lot/open.ts')).lotOpenCommand,
      },
      {
        name: 'show',
        summary: 'State and yield of a lot',
        load: async () => (await import('./commands/lot/show.ts')).lotShowCommand,
      },
      {
        name: 'close',
        summary: 'Close a lot to further records',
        load: async () => (await import('./commands/lot/close.ts')).lotCloseCommand,
      },
      {
        name: 'codes',
        summary: 'Accepted codes of every unit of a lot',
        load: async () => (await import('./commands/lot/codes.ts')).lotCodesCommand,
      },
    ],
  },
  {
    name: 'design',
    summary: 'Designs that the server keeps',
    verbs: [
      {
        name: 'list',
        summary: 'Designs by key',
        load: async () => (await import('./commands/design/list.ts')).designListCommand,
      },
      {
        name: 'show',
        summary: 'One design and its revisions',
        load: async () => (await import('./commands/design/show.ts')).designShowCommand,
      },
      {
        name: 'pull',
        summary: 'The exact document of a revision',
        load: async () => (await import('./commands/design/pull.ts')).designPullCommand,
      },
      {
        name: 'push',
        summary: 'Save a document as a new design or as its next draft',
        load: async () => (await import('./commands/design/push.ts')).designPushCommand,
      },
      {
        name: 'submit',
        summary: 'Hand a draft in for review',
        load: async () => (await import('./commands/design/submit.ts')).designSubmitCommand,
      },
      {
        name: 'diff',
        summary: 'What changed between two revisions, and what that does to the answer',
        load: async () => (await import('./commands/design/diff.ts')).designDiffCommand,
      },
    ],
  },
  {
    name: 'proof',
    summary: 'Proof that a record stands in the ledger',
    verbs: [
      {
        name: 'get',
        summary: 'The proof of a record, as one file',
        load: async () => (await import('./commands/proof/get.ts')).proofGetCommand,
      },
      {
        name: 'check',
        summary: 'Whether a proof checks, offline',
        load: async () => (await import('./commands/proof/check.ts')).proofCheckCommand,
      },
      {
        name: 'receipts',
        summary: 'Whether everything that receipts promise is in the ledger',
        load: async () => (await import('./commands/proof/receipts.ts')).proofReceiptsCommand,
      },
    ],
  },
  {
    name: 'ledger',
    summary: 'The ledger as a whole',
    verbs: [
      {
        name: 'key',
        summary: 'The public key, to keep elsewhere',
        load: async () => (await import('./commands/ledger/key.ts')).ledgerKeyCommand,
      },
      {
        name: 'checkpoint',
        summary: 'The newest signed checkpoint, to keep elsewhere',
        load: async () => (await import('./commands/ledger/checkpoint.ts')).ledgerCheckpointCommand,
      },
      {
        name: 'check',
        summary: 'Whether anything was changed, removed or put in',
        load: async () => (await import('./commands/ledger/check.ts')).ledgerCheckCommand,
      },
      {
        name: 'consistency',
        summary: 'Whether an older checkpoint still stands',
        load: async () => (await import('./commands/ledger/consistency.ts')).ledgerConsistencyCommand,
      },
      {
        name: 'export',
        summary: 'Records with all that checking them needs, in one folder',
        load: async () => (await import('./commands/ledger/export.ts')).ledgerExportCommand,
      },
    ],
  },
  {
    name: 'whoami',
    summary: 'Who the token stands for, and which server answers',
    load: async () => (await import('./commands/whoami.ts')).whoamiCommand,
  },
  {
    name: 'completion',
    summary: 'Completion script for a shell',
    load: async () => (await import('./commands/completion.ts')).completionCommand,
  },
]
