import ledgerWorkerUrl from './ledger-worker.ts?worker&url'
import networkWorkerUrl from './network-worker.ts?worker&url'
import yieldWorkerUrl from './yield-worker.ts?worker&url'

/** Trusted Types as browsers have them; TypeScript's DOM library does not know them yet. */
type Policy = { createScriptURL: (url: string) => string }
type PolicyFactory = {
  createPolicy: (name: string, rules: { createScriptURL: (url: string) => string }) => Policy
}

/** The only addresses that a worker may be started from: those that the build made. */
const built: ReadonlySet<string> = new Set([yieldWorkerUrl, networkWorkerUrl, ledgerWorkerUrl])

export function onlyBuilt(url: string): string {
  if (built.has(url)) return url
  throw new TypeError(`No worker of this application: ${url}`)
}

/** One policy, made once: the content security policy allows this name and no other, and no second of it. */
let policy: Policy | null = null

function trusted(url: string): string {
  const { trustedTypes } = globalThis as { trustedTypes?: PolicyFactory }
  policy ??= trustedTypes?.createPolicy('ogee-worker', { createScriptURL: onlyBuilt }) ?? {
    createScriptURL: onlyBuilt,
  }
  return policy.createScriptURL(url)
}

/** A new worker that simulates yield; whoever starts it ends it. */
export function startYieldWorker(): Worker {
  return new Worker(trusted(yieldWorkerUrl), { type: 'module', name: 'ogee-yield' })
}

/** A new worker that looks for resistors; whoever starts it ends it. */
export function startNetworkWorker(): Worker {
  return new Worker(trusted(networkWorkerUrl), { type: 'module', name: 'ogee-network' })
}

/** A new worker that checks the whole ledger; whoever starts it ends it. */
export function startLedgerWorker(): Worker {
  return new Worker(trusted(ledgerWorkerUrl), { type: 'module', name: 'ogee-ledger' })
}
