import type { KeyStatement } from '../contract/proof.ts'
import { canonicalBytes } from './canonical.ts'
import { type LedgerKey, parseVerifierKey, verifierKey } from './checkpoint.ts'
import { fromBase64, type LedgerCrypto, type Sha256, type Sign, toBase64 } from './hash.ts'

type Pair = { key: LedgerKey; sign: Sign }

/**
 * The statement that one key takes the place of another. Both sign: the old one hands over, the new one takes.
 *
 * @param sha256 the hash function.
 * @param replaced key that was in force, and how it signs.
 * @param replacing key that is in force from now on, and how it signs.
 * @returns the statement, which is also the body of a `key` leaf.
 * Throws nothing of its own.
 * Source: decisions.md, Key; RFC 8785 for the signed bytes; RFC 8032 for the signatures.
 * @example keysFrom(crypto, older.key, [signKeyChange(sha256, older, newer)]).length // 2
 */
export function signKeyChange(sha256: Sha256, replaced: Pair, replacing: Pair): KeyStatement {
  const rest = {
    format: 'ogee.key/1' as const,
    key: verifierKey(sha256, replacing.key),
    replaces: verifierKey(sha256, replaced.key),
  }
  const bytes = canonicalBytes(rest)
  return {
    ...rest,
    signatures: { replaced: toBase64(replaced.sign(bytes)), replacing: toBase64(replacing.sign(bytes)) },
  }
}

/**
 * Every key that somebody who trusts one key can trust, by statements that both keys of each change signed: those that it
 * took the place of, and those that took its place, never others of these.
 *
 * @param crypto SHA-256 and Ed25519.
 * @param trusted the key that is kept.
 * @param statements changes, in any order; those that do not check, or lead nowhere, are passed over.
 * @returns the trusted key first, then those before and after it.
 * Throws nothing.
 * Source: decisions.md, Key.
 * @example keysFrom(crypto, key, []) // [key]
 */
export function keysFrom(
  crypto: LedgerCrypto,
  trusted: LedgerKey,
  statements: readonly KeyStatement[],
): LedgerKey[] {
  const start: Named = { text: verifierKey(crypto.sha256, trusted), key: trusted }
  const changes = statements.flatMap((statement) => changeOf(crypto, statement) ?? [])
  const later = reached(start, changes)
  const earlier = reached(
    start,
    changes.map(({ from, to }) => ({ from: to, to: from })),
  )
  return [...new Map([...later, ...earlier]).values()]
}

type Named = { text: string; key: LedgerKey }
type Step = { from: Named; to: Named }

/** Only one way: from a key that was replaced nothing leads on again, or whoever stole it could hand over to his own. */
function reached(start: Named, steps: readonly Step[]): Map<string, LedgerKey> {
  const found = new Map([[start.text, start.key]])
  // Each round adds at least one key or is the last, so a chain in any order is followed to its end.
  for (let before = 0; before < found.size; ) {
    before = found.size
    for (const { from, to } of steps) if (found.has(from.text)) found.set(to.text, to.key)
  }
  return found
}

function changeOf({ sha256, verify }: LedgerCrypto, { signatures, ...rest }: KeyStatement): Step | null {
  const from = rest.replaces === null ? null : parseVerifierKey(sha256, rest.replaces)
  const to = parseVerifierKey(sha256, rest.key)
  if (!from || !to || !signatures || rest.replaces === null) return null
  const bytes = canonicalBytes(rest)
  const signed = (key: LedgerKey, text: string): boolean => {
    const signature = fromBase64(text)
    return signature?.length === 64 && verify(key.publicKey, bytes, signature)
  }
  if (!signed(from, signatures.replaced) || !signed(to, signatures.replacing)) return null
  return { from: { text: rest.replaces, key: from }, to: { text: rest.key, key: to } }
}
