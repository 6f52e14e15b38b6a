import http from 'node:http'
import https from 'node:https'

/**
 * As fetch, over kept connections (one, unless more are said) and in one piece: for a process that asks one question after
 * another, where fetch would spend as long on its streams as the server on the answer. It follows no redirect and takes
 * texts only.
 */
export function keptFetch(connections = 1): typeof globalThis.fetch {
  const options = { keepAlive: true, maxSockets: connections }
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
        const pieces: Buffer[] = []
        answer.on('data', (piece: Buffer) => pieces.push(piece))
        answer.on('end', () => resolve(answerOf(answer, async () => Buffer.concat(pieces))))
        // As with fetch, a body that is cut is found out by whoever reads it: the head has come.
        answer.on('error', (error) => resolve(answerOf(answer, () => Promise.reject(error))))
      })
      asked.end(body)
    })
}

/** The part of a Response that calls of ours look at; a whole one takes longer to make than the rest of the way. */
function answerOf(
  { statusCode: status = 0, headers }: http.IncomingMessage,
  body: () => Promise<Buffer>,
): Response {
  const text = async () => (await body()).toString('utf8')
  /** A large body has its memory for itself; a small one lies among others. */
  const arrayBuffer = async () => {
    const { buffer, byteOffset, length } = await body()
    return length === buffer.byteLength ? buffer : buffer.slice(byteOffset, byteOffset + length)
  }
  const answer = {
    ok: status >= 200 && status < 300,
    status,
    headers: { get: (name: string) => headers[name.toLowerCase()]?.toString() ?? null },
    arrayBuffer,
    text,
    json: async () => JSON.parse(await text()) as unknown,
  }
  return answer as unknown as Response
}
