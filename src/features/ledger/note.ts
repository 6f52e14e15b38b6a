/** Reading of the two public texts, only to show them. Checking signatures is the ledger's own code. */

export type Checkpoint = { origin: string; size: number; rootHex: string; signers: string[] }

/** A signed-note checkpoint: origin, size, root (base64), blank line, signature lines. Null when it is not one. */
export function readCheckpoint(text: string): Checkpoint | null {
  const [head = '', tail = ''] = text.split('\n\n')
  const [origin, size, root] = head.split('\n')
  const count = Number(size)
  const rootHex = root === undefined ? null : hexOf(root)
  if (!origin || rootHex === null || !Number.isSafeInteger(count) || count < 0) return null
  const signers = tail
    .split('\n')
    .map((line) => /^\u2014 (\S+) \S+$/.exec(line)?.[1])
    .filter((name) => name !== undefined)
  return { origin, size: count, rootHex, signers }
}

/** A verifier key `name+hash+base64(type byte, public key)`; type 1 is Ed25519. */
export function readVerifierKey(text: string): { name: string; hash: string; publicHex: string } | null {
  const match = /^([^\s+]+)\+([0-9a-f]{8})\+(\S+)$/.exec(text.trim())
  const bytes = match?.[3] === undefined ? null : hexOf(match[3])
  if (!match?.[1] || !match[2] || !bytes?.startsWith('01')) return null
  return { name: match[1], hash: match[2], publicHex: bytes.slice(2) }
}

function hexOf(base64: string): string | null {
  try {
    return Array.from(atob(base64), (char) => char.charCodeAt(0).toString(16).padStart(2, '0')).join('')
  } catch {
    return null
  }
}
