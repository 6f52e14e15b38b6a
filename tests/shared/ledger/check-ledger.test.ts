import { setImmediate } from 'node:timers/promises'
import { expect, test } from 'vitest'
import { asText, crypto } from '../../../cli/ledger/crypto.ts'
import { checkLedger, type LedgerSource } from '../../../shared/ledger/check/check-ledger.ts'

test('the next entries are on their way before these are checked, and a long page lets them come in', async () => {
  const said: string[] = []
  const line = new TextEncoder().encode('no entry')
  function* lines(page: number) {
    for (let i = 0; i < 450; i++) {
      said.push(`line of ${page}`)
      yield line
    }
  }
  const source: LedgerSource = {
    keys: async () => [],
    checkpoints: async () => [],
    strays: async () => [],
    entries: async (from) => {
      // As a request does, it leaves in the next turn of the loop; its answer takes some more.
      await setImmediate()
      said.push(`sent ${from}`)
      await setImmediate()
      said.push(`come ${from}`)
      return { lines: lines(from), next: from === 0 ? 450 : null, size: 900 }
    },
  }
  const { ok } = await checkLedger(source, {
    sha256: crypto.sha256,
    asText,
    run: async (check) => check(crypto),
    key: { name: 'test/ledger', publicKey: new Uint8Array(32) },
    kept: [],
    verifyAll: null,
    onProgress: () => undefined,
    turn: setImmediate,
  })
  expect(ok, 'what is no entry is found').toBe(false)
  const lineAt = said.indexOf('line of 0')
  // The first line is taken out of the page, then comes the turn.
  expect(said.indexOf('sent 450')).toBe(lineAt + 1)
  expect(said.indexOf('come 450')).toBeLessThan(said.lastIndexOf('line of 0'))
})
