import { version } from './version.ts'

/**
 * The only place that ends the process. Everything else is loaded when it is needed: a question for the version
 * alone must not pay for the solver.
 */
async function main(argv: readonly string[]): Promise<void> {
  if (argv.length === 1 && (argv[0] === '--version' || argv[0] === '-V')) {
    process.stdout.write(`${version}\n`)
    return
  }
  let isDone = false
  process.on('exit', () => {
    // Ending before it is done is a defect and no verdict; Node itself would end with 13, which says that a unit failed.
    if (!isDone && process.exitCode === 13) process.exitCode = 70
  })
  const { runCommandLine } = await import('./run.ts')
  const { processIo, sayNow } = await import('./io.ts')
  const { interruption } = await import('./trouble.ts')
  const io = processIo()
  process.on('SIGINT', () => {
    sayNow(interruption(argv, io))
    // At once: whoever pressed Ctrl-C does not wait for a slow reader, and an interrupted result is no result.
    process.exit(130)
  })
  process.exitCode = await runCommandLine(argv, io)
  isDone = true
  // A command that is done before its input is does not wait for the rest of it.
  process.stdin.unref?.()
}

await main(process.argv.slice(2))
