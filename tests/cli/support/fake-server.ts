import { createServer, type IncomingMessage, type Server, type ServerResponse } from 'node:http'
import type { AddressInfo } from 'node:net'
import { type ErrorCode, errorTable } from '../../../shared/errors.ts'

export type Seen = {
  method: string
  path: string
  authorization: string | undefined
  key: string | undefined
  body: Record<string, unknown> | undefined
  /** The body as it came; of a block of lines it is the only form. */
  text: string
}
export type Reply = (request: Seen, response: ServerResponse) => void

/** A loopback server that answers as the contract says, one prepared reply a request; the last one stays. */
export class FakeServer {
  readonly seen: Seen[] = []
  url = ''
  #replies: Reply[] = []
  readonly #server: Server = createServer((request, response) => void this.#answer(request, response))

  async start(): Promise<this> {
    await new Promise<void>((resolve) => this.#server.listen(0, '127.0.0.1', resolve))
    this.url = `http://127.0.0.1:${(this.#server.address() as AddressInfo).port}`
    return this
  }

  async stop(): Promise<void> {
    this.#server.closeAllConnections()
    await new Promise((resolve) => this.#server.close(resolve))
  }

  willAnswer(...replies: Reply[]): void {
    this.seen.length = 0
    this.#replies = replies
  }

  async #answer(request: IncomingMessage, response: ServerResponse): Promise<void> {
    const pieces: Buffer[] = []
    for await (const piece of request) pieces.push(piece as Buffer)
    const text = Buffer.concat(pieces).toString('utf8')
    const isJson = text !== '' && request.headers['content-type'] !== 'application/x-ndjson'
    const seen: Seen = {
      method: request.method ?? '',
      path: request.url ?? '',
      authorization: request.headers.authorization,
      key: request.headers['idempotency-key'] as string | undefined,
      body: isJson ? (JSON.parse(text) as Record<string, unknown>) : undefined,
      text,
    }
    this.seen.push(seen)
    const reply = this.#replies.length > 1 ? this.#replies.shift() : this.#replies[0]
    if (reply) reply(seen, response)
    else response.writeHead(404).end()
  }
}

export const json =
  (status: number, body: unknown, headers: Record<string, string> = {}): Reply =>
  (_, response) => {
    response.writeHead(status, { 'content-type': 'application/json', ...headers }).end(JSON.stringify(body))
  }

export const problem = (code: ErrorCode, headers: Record<string, string> = {}): Reply => {
  const { status, title } = errorTable[code]
  const body = { type: `/problems/${code}`, title, status, detail: `${title}, says the fake server.`, code }
  return json(status, body, { 'content-type': 'application/problem+json', ...headers })
}

/** The head of a good answer and half of its body, then nothing. */
export const cut: Reply = (_, response) => {
  response.writeHead(201, { 'content-type': 'application/json', 'content-length': '5000' })
  response.write('{"format":"ogee.record/1",')
  setTimeout(() => response.destroy(), 20)
}

/** The connection is closed without a word. */
export const hangUp: Reply = (_, response) => {
  response.destroy()
}
