import { AccessDeniedError } from 'sequelize'
import { isOgeeError, OgeeError } from '../shared/errors.ts'
import { readConfig } from './config.ts'
import { asOutage } from './db/failure.ts'
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

/** A database that is not there yet is worth another start (75); an account that it does not let in is not (78). */
function asStartTrouble(cause: unknown): unknown {
  if (cause instanceof AccessDeniedError) {
    return new OgeeError(
      'configuration',
      'The database refuses the account of DATABASE_URL or DATABASE_ADMIN_URL.',
      {
        cause,
      },
    )
  }
  return asOutage(cause)
}

main().catch((cause: unknown) => {
  const error = asStartTrouble(cause)
  const known = isOgeeError(error)
  process.stderr.write(
    `ogee: ${known ? error.message : error instanceof Error ? error.stack : String(error)}\n`,
  )
  process.exit(known ? error.exit : 70)
})
