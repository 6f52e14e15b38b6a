import http from 'node:http'
import https from 'node:https'

/**
 * As fetch, over one kept connection and in one piece: for a process that asks one question after another, where fetch would
 * spend as long on its streams as the server on the answer. It follows no redirect and takes texts only.
 */
export function keptFetch(): typeof globalThis.fetch {
  const options = { keepAlive: true, maxSockets: 1 }
  const agents = { 'http:': new http.Agent(options), 'https:': new https.Agent(options) }
  return (target, init = {}) =>
    new Promise((resolve, reject) => {
      const url = new URL(String(target))
      const isTls = url.protocol === 'https:'
      const body = typeof init.body === 'string' ? Buffer.from(init.body) : undefined
      const headers = {
        ...(init.headers as Record<string, string>),
        ...(body ? { 'content-length': body.length } : {}),
      }
      const asked = (isTls ? https : http).request(url, {
        method: init.method ?? 'GET',
        headers,
        agent: agents[isTls ? 'https:' : 'http:'],
        ...(init.signal ? { signal: init.signal } : {}),
      })
      asked.on('error', reject)
      asked.on('response', (answer) => {
        const { statusCode: status = 0 } = answer
        const reply = (body: BodyInit | null) =>
          resolve(new Response(body, { status, headers: headersOf(answer) }))
        const pieces: Buffer[] = []
        answer.on('data', (piece: Buffer) => pieces.push(piece))
        answer.on('end', () => reply(status === 204 || status === 304 ? null : Buffer.concat(pieces)))
        // As with fetch, a body that is cut is found out by whoever reads it: the head has come.
        answer.on('error', (error) => reply(new ReadableStream({ start: (stream) => stream.error(error) })))
      })
      asked.end(body)
    })
}

function headersOf({ rawHeaders }: http.IncomingMessage): [string, string][] {
  const pairs: [string, string][] = []
  for (let i = 0; i < rawHeaders.length; i += 2) pairs.push([rawHeaders[i]!, rawHeaders[i + 1]!])
  return pairs
}
