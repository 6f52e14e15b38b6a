import { writeFileSync } from 'node:fs'
import { connect } from 'node:net'
import { dirname, join } from 'node:path'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import type { Harness } from '../support/server-harness.ts'
import { serverScene } from '../support/server-scene.ts'

let harness: Harness
const marker = 'this stands beside the pages and is nobody’s business'

beforeAll(async () => {
  ;({ harness } = await serverScene())
  writeFileSync(join(dirname(harness.deps.config.webRoot), 'secret.txt'), marker)
})
afterAll(() => harness.close())

/** The path exactly as written: clients would tidy it up. */
const raw = (path: string) =>
  new Promise<string>((resolve) => {
    const socket = connect(harness.port, '127.0.0.1')
    let answer = ''
    socket.on('data', (chunk) => {
      answer += chunk.toString('latin1')
    })
    socket.on('close', () => resolve(answer))
    socket.on('error', () => resolve(answer))
    socket.setTimeout(8_000, () => socket.destroy())
    socket.write(`GET ${path} HTTP/1.1\r\nHost: x\r\nAccept: text/html,*/*\r\nConnection: close\r\n\r\n`)
  })

const ups = [
  '../',
  '..%2f',
  '%2e%2e/',
  '%2e%2e%2f',
  '..\\',
  '..%5c',
  '%252e%252e%252f',
  '..;/',
  '....//',
  '%c0%ae%c0%ae/',
]
const corpus = ups.flatMap((up) =>
  ['/', '/assets/'].flatMap((from) =>
    [1, 2, 3].flatMap((depth) =>
      ['secret.txt', 'secret.txt%00.js'].map((name) => from + up.repeat(depth) + name),
    ),
  ),
)

describe('ASVS V5.3.2 files outside the pages', () => {
  it('are reached by no way of writing the path', async () => {
    for (const path of corpus) {
      const answer = await raw(path)
      expect(answer, path).toMatch(/^HTTP\/1\.1 (200|400|404) /)
      expect(Buffer.from(answer, 'latin1').toString('utf8'), path).not.toContain(marker)
      // 200 is the page that stands for every view's address, and nothing else.
      if (answer.startsWith('HTTP/1.1 200')) expect(answer, path).toContain('<div id="root">')
    }
  })

  it('nor do texts of a request get into the headers of the answer (ASVS V1.2.1)', async () => {
    for (const path of [
      '/history?unit=a%0d%0aX-Bad:%201',
      '/records/a%0d%0aX-Bad:%201',
      '/api/v1/designs/a%0d%0aX-Bad:%201',
    ]) {
      const answer = await raw(path)
      expect(answer.split('\r\n\r\n')[0]!.toLowerCase(), path).not.toContain('x-bad')
    }
  })
})
