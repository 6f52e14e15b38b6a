import { createServer as createHttpServer, type RequestListener, type Server } from 'node:http'
import { createServer as createHttpsServer } from 'node:https'
import type { Duplex } from 'node:stream'
import { v7 as uuid } from 'uuid'
import { OgeeError } from '../../shared/errors.ts'
import { problemOf } from './problems.ts'

/** Bounds on how slowly and how largely a request may arrive, so that slow or huge ones hold up nobody. */
const bounds = {
  headersTimeout: 10_000,
  requestTimeout: 30_000,
  keepAliveTimeout: 10_000,
  connectionsCheckingInterval: 2_000,
  maxHeaderSize: 16 * 1024,
  // Node's strict parser: nothing that two parsers could read in two ways (ASVS V4.2.1).
  insecureHTTPParser: false,
  requireHostHeader: true,
} as const

export function createServer(listener: RequestListener, tls: { cert: Buffer; key: Buffer } | null): Server {
  const server = tls
    ? createHttpsServer({ ...bounds, ...tls, minVersion: 'TLSv1.2' }, listener)
    : createHttpServer(bounds, listener)
  server.maxHeadersCount = 100
  server.maxRequestsPerSocket = 0
  server.on('clientError', refuse)
  return server
}

/** What Node's parser would not read gets a problem document and a closed connection. */
function refuse(error: NodeJS.ErrnoException, socket: Duplex): void {
  if (error.code === 'ECONNRESET' || !socket.writable) {
    socket.destroy()
    return
  }
  const [status, problem] = whatOf(error.code)
  const body = JSON.stringify(problemOf(problem, uuid()))
  socket.end(
    [
      `HTTP/1.1 ${status}`,
      'Content-Type: application/problem+json; charset=utf-8',
      `Content-Length: ${Buffer.byteLength(body)}`,
      'X-Content-Type-Options: nosniff',
      'Connection: close',
      '',
      body,
    ].join('\r\n'),
  )
}

function whatOf(code: string | undefined): [string, OgeeError] {
  switch (code) {
    case 'HPE_HEADER_OVERFLOW':
      return [
        '431 Request Header Fields Too Large',
        new OgeeError('header-too-large', 'The headers are larger than 16 KiB.'),
      ]
    case 'ERR_HTTP_REQUEST_TIMEOUT':
      return ['400 Bad Request', new OgeeError('bad-framing', 'The request took too long to arrive.')]
    default:
      return ['400 Bad Request', new OgeeError('bad-framing', 'The request is not well-formed HTTP.')]
  }
}
