import type { Context } from '../command.ts'
import { type ConnectionOptions, connectionFor } from '../config.ts'
import { Spool } from './folder.ts'
import { spoolClient } from './spool-client.ts'
import { Spooler } from './spooler.ts'

/** A spool in its folder, and the way to the server; loaded only by commands that were given --spool. */
export async function openSpooler(
  options: ConnectionOptions,
  folder: string,
  { io }: Context,
): Promise<Spooler> {
  const client = spoolClient(await connectionFor(options, io), io)
  return new Spooler(client, Spool.open(folder), io)
}
