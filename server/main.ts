import { isOgeeError } from '../shared/errors.ts'
import { readConfig } from './config.ts'
import { runServer } from './run-server.ts'

/** The process: only here is it ended. Bad configuration ends it with 78 and one sentence; the supervisor then gives up. */
async function main(): Promise<void> {
  const server = await runServer(readConfig(process.env), (line) => process.stdout.write(`${line}\n`))
  let stopping = false
  const stop = () => {
    if (stopping) return
    stopping = true
    server.stop().then(
      () => process.exit(0),
      () => process.exit(1),
    )
  }
  for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP'] as const) process.on(signal, stop)
  // The supervisor that started us is gone: nobody would stop us otherwise.
  process.on('disconnect', stop)
}

main().catch((error: unknown) => {
  const known = isOgeeError(error)
  process.stderr.write(
    `ogee: ${known ? error.message : error instanceof Error ? error.stack : String(error)}\n`,
  )
  process.exit(known ? error.exit : 70)
})
