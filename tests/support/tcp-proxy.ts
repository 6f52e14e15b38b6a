import { connect, createServer, type Socket } from 'node:net'
import { setTimeout as sleep } from 'node:timers/promises'
import type { Random } from './random.ts'

/** What may befall a connection on its way. */
export type Fate = 'pass' | 'delay' | 'cut-request' | 'cut-answer' | 'reset' | 'black-hole'

/** A small TCP proxy on loopback that treats each connection as `fateOf` says. */
export type TcpProxy = { port: number; fates: Record<Fate, number>; close: () => Promise<void> }

export async function startProxy(target: number, random: Random, fateOf: () => Fate): Promise<TcpProxy> {
  const fates: Record<Fate, number> = {
    pass: 0,
    delay: 0,
    'cut-request': 0,
    'cut-answer': 0,
    reset: 0,
    'black-hole': 0,
  }
  const open = new Set<Socket>()
  const server = createServer((client) => {
    const fate = fateOf()
    fates[fate] += 1
    open.add(client)
    client.on('close', () => open.delete(client)).on('error', () => client.destroy())
    void treat(client, target, fate, random, open)
  })
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve))
  const address = server.address()
  return {
    port: typeof address === 'object' && address ? address.port : 0,
    fates,
    close: async () => {
      for (const socket of open) socket.destroy()
      await new Promise((resolve) => server.close(resolve))
    },
  }
}

async function treat(
  client: Socket,
  target: number,
  fate: Fate,
  random: Random,
  open: Set<Socket>,
): Promise<void> {
  if (fate === 'reset') return void client.resetAndDestroy()
  if (fate === 'black-hole') {
    await sleep(50 + random.below(200))
    return void client.destroy()
  }
  if (fate === 'delay') await sleep(random.below(80))
  const upstream = connect(target, '127.0.0.1')
  open.add(upstream)
  upstream.on('close', () => {
    open.delete(upstream)
    client.destroy()
  })
  upstream.on('error', () => client.destroy())
  client.on('close', () => upstream.destroy())
  if (fate === 'cut-request') {
    client.once('data', (chunk: Buffer) => {
      // Part of the request arrives, or all of it; then the line is dead either way.
      upstream.write(chunk.subarray(0, 1 + random.below(chunk.length)), () => upstream.destroy())
    })
    return
  }
  client.pipe(upstream)
  if (fate === 'cut-answer') {
    upstream.once('data', (chunk: Buffer) => {
      // The server has done the work; the answer is lost in whole or in part.
      client.write(chunk.subarray(0, random.below(chunk.length)), () => client.destroy())
    })
    return
  }
  upstream.pipe(client)
}
