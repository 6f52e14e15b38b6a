import { type Logger, pino } from 'pino'
import type { Config } from './config.ts'
import { errorFacts } from './http/request-log.ts'

/** Structured lines on standard error; standard output is for people. Secrets are also cut by name, should one ever get here. */
export function createLogger(level: Config['log']): Logger {
  return pino(
    {
      level,
      base: { app: 'ogee' },
      timestamp: () => `,"time":"${new Date().toISOString()}"`,
      formatters: { level: (label) => ({ level: label }) },
      serializers: { err: errorFacts },
      redact: {
        paths: [
          'authorization',
          'cookie',
          'password',
          'token',
          'secret',
          '*.authorization',
          '*.cookie',
          '*.password',
          '*.token',
          '*.secret',
          'headers.authorization',
          'headers.cookie',
        ],
        censor: '[cut]',
      },
    },
    pino.destination({ dest: 2, sync: false }),
  )
}
