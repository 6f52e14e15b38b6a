import { fromBase64, joinBytes, type Sha256, type Sign, toBase64, toHex, type Verify } from './hash.ts'

const encoder = new TextEncoder()
/** Signature type of the signed-note format for plain Ed25519. */
const ed25519 = Uint8Array.of(1)

export type LedgerKey = { name: string; publicKey: Uint8Array }
export type Checkpoint = { origin: string; size: number; root: Uint8Array }

/**
 * The four bytes that tell signatures of one name apart: the start of SHA-256 of name, newline, type and public key.
 *
 * @param sha256 the hash function.
 * @param key name (no space, no plus) and 32-byte Ed25519 public key.
 * @returns 4 bytes.
 * Throws nothing of its own.
 * Source: C2SP signed-note, section "Signatures".
 * @example keyHash(sha256, key).length // 4
 */
export function keyHash(sha256: Sha256, key: LedgerKey): Uint8Array {
  return sha256(joinBytes(encoder.encode(`${key.name}\n`), ed25519, key.publicKey)).slice(0, 4)
}

/**
 * A key's short name, as receipts carry it.
 *
 * @param sha256 the hash function.
 * @param key the key.
 * @returns `<name>+<hash, 8 hex digits>`.
 * Throws nothing of its own.
 * Source: C2SP signed-note.
 * @example keyName(sha256, key) // 'ogee.example/ledger+1a2b3c4d'
 */
export function keyName(sha256: Sha256, key: LedgerKey): string {
  return `${key.name}+${toHex(keyHash(sha256, key))}`
}

/**
 * The verifier key: one line that a stranger keeps to check signatures, the content of `ogee.pub`.
 *
 * @param sha256 the hash function.
 * @param key the key.
 * @returns `<name>+<hash>+<base64 of type and public key>`.
 * Throws nothing of its own.
 * Source: C2SP signed-note, section "Verifier keys".
 * @example parseVerifierKey(sha256, verifierKey(sha256, key))?.name // key.name
 */
export function verifierKey(sha256: Sha256, key: LedgerKey): string {
  return `${keyName(sha256, key)}+${toBase64(joinBytes(ed25519, key.publicKey))}`
}

/**
 * Reads a verifier key.
 *
 * @param sha256 the hash function.
 * @param text one line; spaces and newlines around it do not matter.
 * @returns the key, or null when it is malformed, of another type, or its hash does not fit.
 * Throws nothing.
 * Source: C2SP signed-note.
 * @example parseVerifierKey(sha256, 'nonsense') // null
 */
export function parseVerifierKey(sha256: Sha256, text: string): LedgerKey | null {
  const [name, hash, encoded, ...more] = splitKey(text.trim())
  if (!name || !hash || !encoded || more.length > 0) return null
  const bytes = fromBase64(encoded)
  if (bytes?.length !== 33 || bytes[0] !== 1) return null
  const key = { name, publicKey: bytes.slice(1) }
  return toHex(keyHash(sha256, key)) === hash ? key : null
}

/** Base64 may hold a plus, so only the first two separate. */
function splitKey(text: string): string[] {
  const first = text.indexOf('+')
  const second = text.indexOf('+', first + 1)
  if (first < 1 || second < 0) return []
  return [text.slice(0, first), text.slice(first + 1, second), text.slice(second + 1)]
}

/**
 * A signed checkpoint: the whole state of the ledger in five short lines.
 *
 * @param sha256 the hash function.
 * @param checkpoint origin (the ledger's name), number of leaves, root.
 * @param key whose signature it is.
 * @param sign Ed25519 under that key.
 * @returns the note: origin, size, root in base64, an empty line, the signature line; newline at the end.
 * Throws nothing of its own.
 * Source: C2SP tlog-checkpoint and signed-note.
 * @example signCheckpoint(sha256, checkpoint, key, sign).split('\n')[0] // checkpoint.origin
 */
export function signCheckpoint(sha256: Sha256, checkpoint: Checkpoint, key: LedgerKey, sign: Sign): string {
  const text = `${checkpoint.origin}\n${checkpoint.size}\n${toBase64(checkpoint.root)}\n`
  const signature = joinBytes(keyHash(sha256, key), sign(encoder.encode(text)))
  return `${text}\n\u2014 ${key.name} ${toBase64(signature)}\n`
}

/**
 * Reads a checkpoint and checks its signature.
 *
 * @param sha256 the hash function.
 * @param note the signed note; lines by other signers are passed over.
 * @param key the verifier key.
 * @param verify Ed25519.
 * @returns the checkpoint, or null when it is malformed or not signed by the key.
 * Throws nothing.
 * Source: C2SP tlog-checkpoint and signed-note.
 * @example checkCheckpoint(sha256, signCheckpoint(sha256, c, key, sign), key, verify)?.size // c.size
 */
export function checkCheckpoint(
  sha256: Sha256,
  note: string,
  key: LedgerKey,
  verify: Verify,
): Checkpoint | null {
  const end = note.indexOf('\n\n')
  if (end < 0) return null
  const text = note.slice(0, end + 1)
  const signed = note
    .slice(end + 2)
    .split('\n')
    .some((line) => isSignature(sha256, line, text, key, verify))
  const [origin, size, root, ...more] = text.split('\n')
  const bytes = fromBase64(root ?? '')
  if (!signed || !origin || !/^(0|[1-9]\d{0,15})$/.test(size ?? '') || bytes?.length !== 32) return null
  // Extension lines may follow the root; this version knows none, and passes over them as the format asks.
  return more.at(-1) === '' ? { origin, size: Number(size), root: bytes } : null
}

function isSignature(sha256: Sha256, line: string, text: string, key: LedgerKey, verify: Verify): boolean {
  const start = `\u2014 ${key.name} `
  if (!line.startsWith(start)) return false
  const bytes = fromBase64(line.slice(start.length))
  if (bytes?.length !== 68 || toHex(bytes.slice(0, 4)) !== toHex(keyHash(sha256, key))) return false
  return verify(key.publicKey, encoder.encode(text), bytes.slice(4))
}

/**
 * Who claims to have signed a note: short names of keys, as `keyName` gives them. Nothing is checked.
 *
 * @param note the signed note.
 * @returns `<name>+<hash>` of each signature line that can be read.
 * Throws nothing.
 * Source: C2SP signed-note, section "Signatures".
 * @example signerNames('nonsense') // []
 */
export function signerNames(note: string): string[] {
  return note.split('\n').flatMap((line) => {
    const match = /^\u2014 ([^\s+]+) (\S+)$/.exec(line)
    const bytes = fromBase64(match?.[2] ?? '')
    return match && bytes?.length === 68 ? [`${match[1]}+${toHex(bytes.slice(0, 4))}`] : []
  })
}
