import { getMe, type Me } from '../../shared/contract/session.ts'
import { type Command, type Context, everyFormat } from '../command.ts'
import type { ConnectionOptions } from '../config.ts'
import { print, type Rendering } from '../output.ts'
import { connect, readConnection, serverAbout, serverOptions } from '../server-options.ts'
import { pairs } from '../table.ts'

export const whoamiCommand: Command<ConnectionOptions> = {
  about: serverAbout,
  options: serverOptions,
  formats: everyFormat,
  examples: [
    { run: 'ogee whoami', says: 'Shows station, scopes, days to expiry and how far the clock is off.' },
  ],
  read: readConnection,
  run: whoami,
}

async function whoami(options: ConnectionOptions, context: Context): Promise<number> {
  const client = await connect(options, context)
  const before = context.io.now()
  const me = await client.call(getMe, {})
  const middle = (before + context.io.now()) / 2
  await print(rendering(client.url, me, middle), context)
  return 0
}

/** The clock difference is ours minus the server's, at the middle of the call; retries make it rougher. */
function rendering(url: string, { who, server }: Me, nowMs: number): Rendering {
  const clockDifferenceSeconds = Math.round((nowMs - Date.parse(server.serverTime)) / 100) / 10
  const daysToExpiry =
    who.kind === 'token' ? Math.floor((Date.parse(who.expiresAt) - nowMs) / 86_400_000) : null
  const json = { format: 'ogee.whoami/1', url, who, server, daysToExpiry, clockDifferenceSeconds }
  const station = who.kind === 'token' ? who.station : null
  const scopes = who.kind === 'token' ? who.scopes : [who.role]
  const rows: [string, string][] = [
    ['Server', `${url}, version ${server.version}, solver ${server.solver}`],
    ['Ledger', server.ledger],
    [who.kind === 'token' ? 'Token' : 'Person', `${who.name} (${who.id})`],
    ['Station', station ?? 'none'],
    [who.kind === 'token' ? 'Scopes' : 'Role', scopes.join(', ')],
    ['Expires', daysToExpiry === null ? 'no' : `in ${daysToExpiry} days`],
    ['Clock', `${clockDifferenceSeconds} s ${clockDifferenceSeconds < 0 ? 'behind' : 'ahead of'} the server`],
  ]
  return {
    json,
    table: () => pairs(rows),
    csv: {
      heads: [
        'url',
        'version',
        'solver',
        'name',
        'station',
        'scopes',
        'days_to_expiry',
        'clock_difference_s',
      ],
      rows: [
        [
          url,
          server.version,
          server.solver,
          who.name,
          station,
          scopes.join(' '),
          daysToExpiry,
          clockDifferenceSeconds,
        ],
      ],
    },
  }
}
